// The pellicle command: sets up the commands, runs the one asked for, and turns errors into one line and an
// exit code (0 done, 1 no answer, 2 usage, 3 input).

#include <algorithm>
#include <exception>
#include <iostream>
#include <memory>
#include <string>
#include <vector>

#include "command.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/version.hpp"

namespace pellicle::cli {
namespace {

/// Help that leads with what people copy: purpose, examples, then the options.
class HelpText : public CLI::Formatter {
 public:
  std::string make_help(const CLI::App* app, std::string name, CLI::AppFormatMode mode) const override {
    if (mode == CLI::AppFormatMode::Sub) return CLI::Formatter::make_help(app, name, mode);
    std::string text = app->get_description() + "\n";
    if (!app->get_footer().empty()) text += "\nExamples\n" + app->get_footer() + "\n";
    return text + make_usage(app, name) + make_positionals(app) + make_groups(app, mode) + make_subcommands(app, mode);
  }
};

std::string one_line(std::string text) {
  std::replace(text.begin(), text.end(), '\n', ' ');
  return text;
}

int run(int argc, char** argv) {
  CLI::App app("pellicle " + std::string(version()) +
               ": film thickness with its uncertainty from fitted photoelectron peak areas.");
  app.name("pellicle");
  app.formatter(std::make_shared<HelpText>());
  app.set_version_flag("--version", "pellicle " + std::string(version()));
  app.require_subcommand(0, 1);
  app.footer("  pellicle new coupon.toml            write a commented run file and area table to start from\n"
             "  pellicle check coupon.toml          see what would be computed, and what is missing\n"
             "  pellicle thickness coupon.toml      thickness, uncertainty, budget, findings\n"
             "  pellicle thickness --film SiO2 --substrate Si --line \"Si 2p\" --source \"Al Ka\" --emission-deg 34 \\\n"
             "      --film-area 20000 --substrate-area 10000 --reference-ratio 0.9329 --length-nm 3.448\n");

  std::vector<std::pair<const CLI::App*, Run>> commands;
  const auto add = [&](Run (*setup)(CLI::App&)) {
    Run command = setup(app);
    commands.emplace_back(app.get_subcommands(nullptr).back(), std::move(command));
  };
  for (auto* setup : {add_thickness, add_lengths, add_materials, add_lines, add_check, add_new}) add(setup);

  std::string topic;
  CLI::App* help = app.add_subcommand("help", "Help on a command.");
  help->add_option("command", topic, "name of a command");

  try {
    app.parse(argc, argv);
    if (help->parsed()) {
      const CLI::App* asked = topic.empty() ? &app : nullptr;
      for (const auto& [command, action] : commands) asked = command->get_name() == topic ? command : asked;
      if (!asked) throw CLI::ExtrasError("pellicle", std::vector<std::string>{topic});
      std::cout << asked->help(topic.empty() ? "" : "pellicle");
      return kDone;
    }
  } catch (const CLI::CallForHelp&) {
    const auto used = app.get_subcommands();
    std::cout << (used.empty() ? app.help() : used.front()->help("pellicle"));
    return kDone;
  } catch (const CLI::CallForVersion&) {
    std::cout << "pellicle " << version() << '\n';
    return kDone;
  } catch (const CLI::ExtrasError&) {
    const auto used = app.get_subcommands();
    const std::string name = used.empty() ? "pellicle" : "pellicle " + used.front()->get_name();
    const std::vector<std::string> left = app.remaining(true);
    const auto option = std::find_if(left.begin(), left.end(), [](const std::string& word) { return word.starts_with("-"); });
    const std::string& first = option != left.end() ? *option : left.empty() ? topic : left.front();
    const char* what = option != left.end() ? "unknown option " : used.empty() || used.front() == help ? "unknown command " : "one argument too many: ";
    std::cerr << name << ": " << what << first << "; see " << name << " --help\n";
    return kUsage;
  } catch (const CLI::ParseError& e) {
    const auto used = app.get_subcommands();
    const std::string name = used.empty() ? "pellicle" : "pellicle " + used.front()->get_name();
    std::cerr << name << ": " << one_line(e.what()) << "; see " << name << " --help\n";
    return kUsage;
  }
  for (const auto& [command, action] : commands) {
    if (!command->parsed()) continue;
    try {
      return action();
    } catch (const UsageError& e) {
      std::cerr << "pellicle " << command->get_name() << ": " << e.what() << "; see pellicle " << command->get_name() << " --help\n";
      return kUsage;
    } catch (const InputError& e) {
      std::cerr << "pellicle " << command->get_name() << ": " << e.what() << '\n';
      return kInput;
    } catch (const Error& e) {
      std::cerr << "pellicle " << command->get_name() << ": " << e.what() << '\n';
      return kNoAnswer;
    } catch (const std::bad_alloc&) {
      std::cerr << "pellicle " << command->get_name() << ": the input does not fit into memory\n";
      return kInput;
    }
  }
  std::cout << app.help();
  return kUsage;
}

}  // namespace
}  // namespace pellicle::cli

int main(int argc, char** argv) {
  try {
    return pellicle::cli::run(argc, argv);
  } catch (const std::exception& e) {
    std::cerr << "pellicle: " << e.what() << '\n';
    return pellicle::cli::kNoAnswer;
  }
}
