#pragma once
/// Words and numbers that figures and reports share.

#include <cstddef>
#include <string>
#include <string_view>

#include "pellicle/job/run.hpp"
#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// UTF-8 text with one character for every byte or control character that has no place in a document; line breaks
/// and tabs become blanks.
[[nodiscard]] std::string printable(std::string_view text);

/// Number of characters of UTF-8 text.
[[nodiscard]] std::size_t characters(std::string_view text) noexcept;

/// At most `most` characters; an ellipsis stands for the rest.
[[nodiscard]] std::string shortened(std::string_view text, std::size_t most);

/// Printable text in which characters that a font for European scripts may lack are question marks.
[[nodiscard]] std::string european(std::string_view text);

/// Printable text with <, >, &, " and ' written as entities, for HTML and XML.
[[nodiscard]] std::string escaped(std::string_view text);

/// "2.69 to 4.06", to the digits that the standard uncertainty leaves.
[[nodiscard]] std::string interval_words(const Interval& interval, double sd);

/// Value to the digits that its standard uncertainty leaves: "3.37".
[[nodiscard]] std::string value_words(double value, double sd);

/// "34.5" for an angle in degrees, to a hundredth.
[[nodiscard]] std::string angle_words(double degrees);

/// "attenuation length" for length_nm: an input of the budget for people.
[[nodiscard]] std::string input_words(std::string_view name);

/// "oxide on Al": the layer of a route and what lies below it.
[[nodiscard]] std::string route_words(const Run& run, const ThicknessRoute& route);

/// "Al 2p oxide over Al 2p metal", the lines a route uses.
[[nodiscard]] std::string lines_words(const Run& run, const ThicknessRoute& route);

/// Spot, with its table in front where a run has several.
[[nodiscard]] std::string spot_words(const Run& run, const ThicknessResult& result);

/// "1 note", "2 notes".
[[nodiscard]] std::string counted(std::size_t count, std::string_view one, std::string_view several);

}  // namespace pellicle::detail
