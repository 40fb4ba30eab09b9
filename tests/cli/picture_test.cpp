// Reports and pictures of the command: what is written, where, and that nothing is written over.

#include <filesystem>
#include <string>
#include <vector>

#include "cli/command.hpp"
#include "support/check_rows.hpp"
#include "support/close_to.hpp"
#include "support/scratch_folder.hpp"

using pellicle::test::CommandResult;
using pellicle::test::contains;
using pellicle::test::pellicle_command;
using pellicle::test::read_whole_file;
using pellicle::test::ScratchFolder;
using pellicle::test::text_lines;
namespace fs = std::filesystem;

namespace {

using Words = std::vector<std::string>;

/// A folder with the starter run.
struct Folder : ScratchFolder {
  Folder() { REQUIRE(pellicle_command({"new", "coupon.toml"}, path()).code == 0); }
  [[nodiscard]] CommandResult run(Words words) const {
    Words all = {"thickness", "coupon.toml", "--interval", "gum"};
    all.insert(all.end(), words.begin(), words.end());
    return pellicle_command(all, path());
  }
};

void check_refused(const CommandResult& r, const std::string& part) {
  CHECK(r.code == 2);
  CHECK(r.out.empty());
  CHECK_MESSAGE(text_lines(r.err).size() == 1, r.err);
  CHECK_MESSAGE(contains(r.err, part), r.err);
}

}  // namespace

TEST_SUITE("reports and pictures of the command") {

TEST_CASE("a report is one file that needs nothing else") {
  const Folder folder;
  const CommandResult r = folder.run({"--report", "coupon.html"});
  CHECK(r.code == 0);
  CHECK(contains(r.err, "wrote coupon.html"));
  CHECK(contains(r.out, "mean of 2 spots"));
  const std::string html = read_whole_file(folder.file("coupon.html"));
  CHECK(html.starts_with("<!DOCTYPE html>"));
  CHECK(html.ends_with("</html>\n"));
  // In the order that the reporting standards ask for.
  std::size_t last = 0;
  for (const std::string id : {"specimen", "instrument", "areas", "lengths", "reference", "densities", "results", "budget", "findings", "cautions", "not-stated"}) {
    const std::size_t at = html.find("id=\"" + id + "\"");
    CHECK_MESSAGE(at != std::string::npos, id);
    CHECK_MESSAGE(at > last, id);
    last = at;
  }
  for (const std::string outside : {"http://", "src=", "<link", "@import", "<script"}) {
    // A namespace is a name and not a place.
    std::string text = html;
    for (std::size_t at = 0; (at = text.find("http://www.w3.org/2000/svg", at)) != std::string::npos;) text.erase(at, 26);
    CHECK_MESSAGE(!contains(text, outside), outside);
  }
  // The command that repeats it, and what it is of.
  CHECK(contains(html, "pellicle thickness coupon.toml --interval gum"));
  CHECK(contains(html, "<svg"));
}

TEST_CASE("a picture has the format of its name") {
  const Folder folder;
  for (const auto& [file, begin] : {std::pair<std::string, std::string>{"a.svg", "<?xml"}, {"a.png", "\x89PNG"}, {"a.pdf", "%PDF"}}) {
    const CommandResult r = folder.run({"--plot", file});
    CHECK_MESSAGE(r.code == 0, r.err);
    CHECK_MESSAGE(read_whole_file(folder.file(file)).starts_with(begin), file);
  }
  const CommandResult terminal = folder.run({"--plot"});
  CHECK_MESSAGE(terminal.code == 0, terminal.err);
  CHECK(contains(terminal.out, "nm"));
  CHECK(text_lines(terminal.out).size() > 30);
  check_refused(folder.run({"--plot", "a.gif"}), ".svg");
  check_refused(folder.run({"--report", "a.txt"}), ".html");
  check_refused(folder.run({"--json", "--plot"}), "--plot");
}

TEST_CASE("nothing is written over an input or over another output") {
  const Folder folder;
  const std::string run = read_whole_file(folder.file("coupon.toml")), areas = read_whole_file(folder.file("coupon.csv"));
  check_refused(folder.run({"--out", "coupon.toml"}), "would write over an input");
  check_refused(folder.run({"--csv", "--out", "./coupon.csv"}), "would write over an input");
  check_refused(folder.run({"--json", "--out", "one.svg", "--plot", "one.svg"}), "same file");
  check_refused(folder.run({"--areas", "coupon.csv", "./coupon.csv"}), "twice");
  CHECK(read_whole_file(folder.file("coupon.toml")) == run);
  CHECK(read_whole_file(folder.file("coupon.csv")) == areas);
  CHECK_FALSE(fs::exists(folder.file("one.svg")));
}

TEST_CASE("a report that cannot be written leaves nothing behind") {
  const Folder folder;
  const CommandResult r = folder.run({"--report", "no/such/folder/a.html"});
  CHECK(r.code == 3);
  CHECK(contains(r.err, "no/such/folder/a.html"));
  CHECK_FALSE(fs::exists(folder.file("no")));
}

TEST_CASE("words that are no command or option are named") {
  check_refused(pellicle_command({"thicknes", "a.toml"}), "unknown command thicknes");
  check_refused(pellicle_command({"thickness", "a.toml", "--jsn"}), "unknown option --jsn");
  check_refused(pellicle_command({"thickness", "a.toml", "b.toml"}), "one argument too many");
  check_refused(pellicle_command({"thickness", "a.toml", "--draws", "-5"}), "--draws");
  check_refused(pellicle_command({"thickness", "a.toml", "--seed", "-1"}), "--seed");
}

TEST_CASE("check takes the tables that thickness takes") {
  const Folder folder;
  folder.write("more.csv", "line,area\nAl 2p oxide,1\n");
  const CommandResult r = pellicle_command({"check", "coupon.toml", "--areas", "coupon.csv", "more.csv"}, folder.path());
  CHECK(r.code == 0);
  CHECK(contains(r.out, "2 thicknesses can be computed, 1 cannot"));
}

TEST_CASE("an element symbol finds its solids and nothing that merely spells it") {
  const CommandResult r = pellicle_command({"materials", "Ti"});
  CHECK(r.code == 0);
  CHECK(contains(r.out, "tio2-rutile"));
  CHECK_FALSE(contains(r.out, "hematite"));
}

}  // TEST_SUITE("reports and pictures of the command")
