// pellicle check: reads a run, says what would be computed and what is missing.

#include <memory>

#include "command.hpp"
#include "pellicle/pellicle.hpp"

namespace pellicle::cli {
namespace {

struct Options {
  std::string run_file;
  std::vector<std::string> tables;
  Output output;
};

int check(const Options& o) {
  pellicle::Run run = read_run_file(o.run_file, o.tables);
  std::vector<std::string> inputs = run.tables;
  inputs.push_back(o.run_file);
  check_targets(inputs, {{"--out", o.output.out}});
  run.uncertainty.method = IntervalMethod::gum;  // what is missing shows without drawing
  const ThicknessResults results = run_thickness(run);
  deliver(o.output, o.output.json ? check_json(run, results) : check_text(run, results));
  const bool any = std::any_of(results.results.begin(), results.results.end(), [](const auto& r) { return r.failure.empty(); });
  const bool all = std::all_of(results.results.begin(), results.results.end(), [](const auto& r) { return r.failure.empty(); });
  const bool error_finding = std::any_of(results.findings.begin(), results.findings.end(), [](const Finding& f) { return f.severity == Severity::error; });
  return !any || (o.output.strict && (!all || error_finding)) ? kNoAnswer : kDone;
}

}  // namespace

Run add_check(CLI::App& app) {
  auto o = std::make_shared<Options>();
  CLI::App* c = app.add_subcommand("check", "Reads a run file and its table; says what can be computed and what is doubtful.");
  c->footer("  pellicle check coupon.toml\n  pellicle check coupon.toml --strict && pellicle thickness coupon.toml\n");
  c->add_option("run", o->run_file, "run file (TOML); - reads standard input")->type_name("RUN.toml")->required();
  c->add_option("--areas", o->tables, "area tables that take the place of the run file's")->type_name("TABLE.csv");
  add_output_options(*c, o->output, false, true);
  return [o] { return check(*o); };
}

}  // namespace pellicle::cli
