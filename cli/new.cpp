// pellicle new: a commented run file and area table to start from.

#include <filesystem>
#include <memory>

#include "command.hpp"
#include "pellicle/pellicle.hpp"

namespace pellicle::cli {
namespace {

struct Options {
  std::string run_file;
  Output output;
};

int make_new(const Options& o) {
  namespace fs = std::filesystem;
  const fs::path run(o.run_file);
  if (run.extension() != ".toml") throw InputError(o.run_file, "the name of a run file ends in .toml", "for example coupon.toml");
  fs::path table = run;
  table.replace_extension(".csv");
  std::error_code failure;
  const fs::path folder = run.parent_path();
  if (!folder.empty() && !fs::is_directory(folder, failure)) throw InputError(o.run_file, "there is no folder " + folder.string());
  for (const fs::path& path : {run, table}) {
    if (fs::exists(path, failure)) throw InputError(path.string(), "the file exists already", "choose another name or move it away");
  }
  write_text_file(table.string(), starter_areas());
  write_text_file(run.string(), starter_run(table.filename().string()));
  remark(o.output, "wrote " + run.string() + " and " + table.string() + "; next: pellicle check " + run.string());
  return kDone;
}

}  // namespace

Run add_new(CLI::App& app) {
  auto o = std::make_shared<Options>();
  CLI::App* c = app.add_subcommand("new", "Writes a commented run file and area table (invented numbers) to start from.");
  c->footer("  pellicle new coupon.toml            writes coupon.toml and coupon.csv; never overwrites\n");
  c->add_option("run", o->run_file, "name of the run file")->type_name("RUN.toml")->required();
  c->add_flag("--quiet", o->output.quiet, "no remarks on standard error");
  return [o] { return make_new(*o); };
}

}  // namespace pellicle::cli
