#include "pellicle/matter/formula.hpp"

#include <algorithm>
#include <cmath>

#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle {
namespace {

constexpr std::size_t kMaxLength = 400;
constexpr int kMaxDepth = 32;
constexpr double kMaxCount = 1e6;

bool is_upper(char c) { return c >= 'A' && c <= 'Z'; }
bool is_lower(char c) { return c >= 'a' && c <= 'z'; }
bool is_digit(char c) { return c >= '0' && c <= '9'; }

/// Formula text in ASCII with the character position of every byte: subscript digits become digits,
/// the hydrate dot becomes '*'. Positions count characters, as a person does.
struct AsciiText {
  std::string text;
  std::vector<std::size_t> position;
};

/// Value of the subscript digit U+2080 … U+2089 the text begins with, or -1.
int subscript_digit(std::string_view text) {
  if (!text.starts_with("\xE2\x82") || text.size() < 3) return -1;
  const int digit = static_cast<unsigned char>(text[2]) - 0x80;
  return digit >= 0 && digit <= 9 ? digit : -1;
}

AsciiText to_ascii(std::string_view text) {
  AsciiText ascii;
  std::size_t character = 0;
  for (std::size_t i = 0; i < text.size();) {
    ++character;
    const auto rest = text.substr(i);
    char plain = text[i];
    std::size_t size = 1;
    if (const int digit = subscript_digit(rest); digit >= 0) {
      plain = static_cast<char>('0' + digit);
      size = 3;
    } else if (rest.starts_with("\xC2\xB7")) {  // U+00B7, middle dot
      plain = '*';
      size = 2;
    } else if (rest.starts_with("\xE2\x8B\x85") || rest.starts_with("\xE2\x80\xA2")) {  // U+22C5, U+2022
      plain = '*';
      size = 3;
    }
    ascii.text.push_back(plain);
    ascii.position.push_back(character);
    i += size;
  }
  ascii.position.push_back(character + 1);
  return ascii;
}

class Parser {
 public:
  explicit Parser(std::string_view original) : original_(original), ascii_(to_ascii(original)) {}

  std::vector<FormulaTerm> parse() {
    if (original_.size() > kMaxLength) {
      throw InputError("", "the formula is longer than " + std::to_string(kMaxLength) + " characters");
    }
    if (at_end()) throw InputError("", "the formula is empty", "expected for example Al2O3");
    std::vector<FormulaTerm> all;
    while (true) {
      // A leading count belongs to a hydrate part ("5H2O") and multiplies all of it.
      const double factor = is_digit(peek()) ? number() : 1.0;
      add(all, sequence(0), factor);
      if (at_end()) return all;
      if (peek() != '*') fail("a character that cannot stand here");
      ++at_;
      if (at_end()) fail("nothing follows the dot of the hydrate");
    }
  }

 private:
  std::vector<FormulaTerm> sequence(int depth) {
    std::vector<FormulaTerm> terms;
    while (!at_end()) {
      const char c = peek();
      if (is_upper(c)) {
        const Element* found = symbol();
        add(terms, {{found, 1.0}}, count());
      } else if (c == '(' || c == '[' || c == '{') {
        if (depth == kMaxDepth) fail("brackets nest deeper than 32 levels");
        const std::size_t opened = at_++;
        const std::vector<FormulaTerm> inner = sequence(depth + 1);
        const char close = c == '(' ? ')' : c == '[' ? ']' : '}';
        if (at_end()) fail_at(opened, "this bracket is never closed");
        if (peek() != close) fail(std::string("expected \"") + close + "\" here");
        if (inner.empty()) fail_at(opened, "the bracket is empty");
        ++at_;
        add(terms, inner, count());
      } else {
        break;
      }
    }
    if (terms.empty() && depth == 0) fail("expected the symbol of an element or a bracket");
    return terms;
  }

  const Element* symbol() {
    const std::size_t begin = at_++;
    while (!at_end() && is_lower(peek())) ++at_;
    const std::string_view word = std::string_view(ascii_.text).substr(begin, at_ - begin);
    if (const Element* found = find_element(word)) return found;
    try {
      return &element(word);
    } catch (const InputError& e) {
      fail_at(begin, e.fact(), e.hint());
    }
  }

  double count() {
    if (at_end() || !(is_digit(peek()) || peek() == '.')) return 1.0;
    return number();
  }

  double number() {
    const std::size_t begin = at_;
    while (!at_end() && (is_digit(peek()) || peek() == '.')) ++at_;
    const std::optional<double> value = parse_number(std::string_view(ascii_.text).substr(begin, at_ - begin));
    if (!value) fail_at(begin, "this count is not a number", "write a hydrate with · or *, as in CuSO4*5H2O");
    if (!(*value > 0.0)) fail_at(begin, "a count must be greater than zero");
    if (*value > kMaxCount) fail_at(begin, "a count is greater than 1e6");
    return *value;
  }

  static void add(std::vector<FormulaTerm>& terms, const std::vector<FormulaTerm>& more, double factor) {
    for (const FormulaTerm& term : more) {
      const auto same = std::find_if(terms.begin(), terms.end(),
                                     [&](const FormulaTerm& t) { return t.element == term.element; });
      if (same == terms.end()) {
        terms.push_back({term.element, term.count * factor});
      } else {
        same->count += term.count * factor;
      }
    }
  }

  [[nodiscard]] bool at_end() const { return at_ == ascii_.text.size(); }
  [[nodiscard]] char peek() const { return ascii_.text[at_]; }

  [[noreturn]] void fail(const std::string& fact) const { fail_at(at_, fact); }
  [[noreturn]] void fail_at(std::size_t index, const std::string& fact, const std::string& hint = {}) const {
    throw InputError("formula \"" + original_ + "\", character " + std::to_string(ascii_.position[index]), fact, hint);
  }

  std::string original_;
  AsciiText ascii_;
  std::size_t at_ = 0;
};

}  // namespace

Formula Formula::parse(std::string_view text) {
  Formula formula;
  formula.text_ = text;
  formula.terms_ = Parser(text).parse();
  // Nested counts multiply; what comes out must still be an ordinary number of atoms.
  if (!(formula.atoms() <= 1e12)) throw InputError("formula \"" + formula.text_ + "\"", "it holds too many atoms");
  return formula;
}

double Formula::molar_mass_g_mol() const noexcept {
  double sum = 0.0;
  for (const FormulaTerm& t : terms_) sum += t.count * t.element->atomic_weight_g_mol;
  return sum;
}

double Formula::atoms() const noexcept {
  double sum = 0.0;
  for (const FormulaTerm& t : terms_) sum += t.count;
  return sum;
}

double Formula::mean_atomic_number() const noexcept {
  double sum = 0.0;
  for (const FormulaTerm& t : terms_) sum += t.count * t.element->z;
  return sum / atoms();
}

double Formula::count(std::string_view symbol) const noexcept {
  for (const FormulaTerm& t : terms_) {
    if (t.element->symbol == symbol) return t.count;
  }
  return 0.0;
}

bool Formula::same_composition(const Formula& other) const noexcept {
  if (terms_.size() != other.terms_.size()) return false;
  const double own = atoms();
  const double others = other.atoms();
  return std::all_of(terms_.begin(), terms_.end(), [&](const FormulaTerm& t) {
    return std::abs(t.count / own - other.count(t.element->symbol) / others) < 1e-9;
  });
}

}  // namespace pellicle
