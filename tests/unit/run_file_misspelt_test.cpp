#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/io/run_file.hpp"
#include "pellicle/io/starter.hpp"
#include "support/close_to.hpp"
#include "support/scratch_folder.hpp"

using namespace pellicle;

TEST_SUITE("run file") {

TEST_CASE("a misspelt key is called unknown and not missing") {
  struct Fault {
    std::string passage, replacement, key, nearest;
  };
  const std::vector<Fault> faults = {
      {"source = \"Al Ka\"", "sorce = \"Al Ka\"", "instrument.sorce", "source"},
      {"substrate = \"Al\"", "subtrate = \"Al\"", "sample.subtrate", "substrate"},
      {"name = \"contamination\"", "nmae = \"contamination\"", "sample.layer[1].nmae", "name"},
      {"material = \"hydrocarbon\"", "matrial = \"hydrocarbon\"", "sample.layer[1].matrial", "material"},
      {"label = \"Al 2p oxide\"", "lable = \"Al 2p oxide\"", "line[1].lable", "label"},
      {"level = \"Al 2p\"", "levle = \"Al 2p\"", "line[1].levle", "level"},
      {"from = \"oxide\"", "form = \"oxide\"", "line[1].form", "from"},
      {"film = \"Al 2p oxide\"", "flim = \"Al 2p oxide\"", "reference[1].flim", "film"},
      {"ratio = {", "ratoi = {", "reference[1].ratoi", "ratio"},
      {"areas = \"", "aeras = \"", "data.aeras", "areas"},
  };
  const test::ScratchFolder folder;
  folder.write("areas.csv", starter_areas());
  for (const Fault& fault : faults) {
    std::string text = starter_run("areas.csv");
    const std::size_t at = text.find(fault.passage);
    REQUIRE_MESSAGE(at != std::string::npos, fault.passage);
    text.replace(at, fault.passage.size(), fault.replacement);
    const auto error = test::error_of<InputError>([&] { (void)parse_run(text, folder.file("run.toml")); });
    CHECK_MESSAGE(error.where().ends_with(": " + fault.key), std::string(error.what()));
    CHECK_MESSAGE(error.hint() == "did you mean \"" + fault.nearest + "\"?", std::string(error.what()));
  }
}

TEST_CASE("letters beyond ASCII stand in quotation marks and comments only") {
  const test::ScratchFolder folder;
  folder.write("areas.csv", starter_areas());
  const std::string starter = starter_run("areas.csv");
  const auto parse = [&](const std::string& head) { return parse_run(head + starter, folder.file("run.toml")); };
  for (const std::string bare : {"µ = 1\n", "a = µ\n", "\"a\" µ = 1\n", "'' µ\n", "\"\\\"\" µ\n", "\"\"\"\n\"\"\" µ"}) {
    const auto error = test::error_of<InputError>([&] { (void)parse(bare); });
    CHECK_MESSAGE(error.fact() == "a character beyond ASCII stands outside quotation marks", bare);
  }
  CHECK(test::error_of<InputError>([&] { (void)parse("# µ\n\n  ä\n"); }).where().ends_with("run.toml:3:3"));
  // Where they may stand, they do.
  std::string text = starter;
  text.replace(text.find("title = \""), 9, "# Å, 'µ\ntitle = \"µ \\\" ä' # ");
  CHECK(parse_run(text, folder.file("run.toml")).title.starts_with("µ \" ä' # "));
}

}  // TEST_SUITE("run file")
