// SPDX-License-Identifier: GPL-3.0-or-later
// Reading quantities. A text is a number, an optional SI prefix and a unit; each step that fails says where and what was
// expected.
#include "engine/quantity/quantity.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <limits>
#include <optional>

#include "engine/quantity/unit_table.hpp"

namespace binwright {
namespace {

/// Length in bytes of the blank at `at`: space, tab, no-break, thin, narrow no-break or figure space; 0 = none.
std::size_t blank(std::string_view text, std::size_t at) {
    if (at >= text.size()) return 0;
    if (text[at] == ' ' || text[at] == '\t') return 1;
    if (text.substr(at).starts_with("\u00a0")) return 2;
    for (const std::string_view space : {"\u2009", "\u202f", "\u2007", "\u2002", "\u2005"})
        if (text.substr(at).starts_with(space)) return space.size();
    return 0;
}

/// 1-based character number of a byte offset.
int character(std::string_view text, std::size_t byte) {
    int count = 1;
    for (std::size_t k = 0; k < byte && k < text.size(); ++k)
        if ((static_cast<unsigned char>(text[k]) & 0xC0) != 0x80) ++count;
    return count;
}

[[noreturn]] void refuse(std::string_view text, std::size_t byte, std::string message, std::string expected) {
    throw InputError(Fault{{"", 0, character(text, byte)}, "", std::move(message), std::move(expected)});
}

std::string quoted(std::string_view text) { return "\"" + std::string(text) + "\""; }

bool digit(char c) { return c >= '0' && c <= '9'; }

class Reader {
  public:
    Reader(std::string_view text, Unit unit, bool bare_allowed) : text_(text), unit_(unit), bare_allowed_(bare_allowed) {}

    double read() {
        skip_blanks();
        if (at_ == text_.size()) refuse(text_, at_, "nothing is written here", std::string(expected_text(unit_)));
        if (const auto coded = rkm()) return *coded;
        const double number = read_number();
        const std::size_t after_number = at_;
        skip_blanks();
        std::string_view rest = text_.substr(at_);
        while (!rest.empty() && trailing_blank(rest)) rest.remove_suffix(trailing_blank(rest));
        if (rest.empty()) return without_unit(number, after_number);
        return in_base(number * factor(rest), rest);
    }

  private:
    std::string_view text_;
    Unit unit_;
    bool bare_allowed_;
    std::size_t at_ = 0;
    bool celsius_ = true;

    void skip_blanks() {
        while (const std::size_t width = blank(text_, at_)) at_ += width;
    }

    static std::size_t trailing_blank(std::string_view text) {
        for (const std::size_t width : {1u, 2u, 3u})
            if (text.size() >= width && blank(text, text.size() - width) == width) return width;
        return 0;
    }

    double read_number() {
        std::string digits;
        const std::size_t start = at_;
        if (at_ < text_.size() && (text_[at_] == '+' || text_[at_] == '-')) {
            if (text_[at_] == '-') digits += '-';
            ++at_;
        } else if (text_.substr(at_).starts_with("\u2212")) {
            digits += '-';
            at_ += 3;
        }
        const std::string lower = lower_case(text_.substr(at_, 8));
        if (lower.starts_with("nan") || lower.starts_with("inf"))
            refuse(text_, start, quoted(text_.substr(start)) + " is not a number that can be computed with",
                   std::string(expected_text(unit_)));
        std::string mantissa;
        int points = 0, commas = 0;
        bool grouped = false;
        std::size_t group = 0;
        while (at_ < text_.size()) {
            const char c = text_[at_];
            if (digit(c)) {
                mantissa += c;
                ++group;
                ++at_;
            } else if (c == '.' && !(at_ + 1 < text_.size() && text_[at_ + 1] == '.')) {
                mantissa += '.';
                ++points;
                ++at_;
            } else if (c == ',') {
                mantissa += ',';
                ++commas;
                ++at_;
            } else if (const std::size_t width = blank(text_, at_); width && three_digits(at_ + width) && !mantissa.empty() &&
                       points == 0 && commas == 0 && (grouped ? group == 3 : group <= 3)) {
                at_ += width;  // digits grouped by spaces: 20 000
                grouped = true;
                group = 0;
            } else {
                break;
            }
        }
        if (points > 1 || commas > 1 || (points == 1 && commas == 1))
            refuse(text_, start, quoted(mantissa) + " has more than one decimal mark", std::string(expected_text(unit_)));
        if (commas == 1) {
            const std::size_t comma = mantissa.find(',');
            const std::size_t behind = mantissa.size() - comma - 1;
            if (behind == 3 && comma >= 1 && comma <= 3 && mantissa[0] != '0') {
                std::string point = mantissa, none = mantissa;
                point[comma] = '.';
                none.erase(comma, 1);
                refuse(text_, start,
                       quoted(mantissa) + " can be read as " + point + " or as " + none + "; write the one that is meant",
                       std::string(expected_text(unit_)));
            }
            mantissa[comma] = '.';
        }
        if (mantissa.find_first_of("0123456789") == std::string::npos)
            refuse(text_, start, "a number is missing before " + quoted(text_.substr(start)), std::string(expected_text(unit_)));
        digits += mantissa.front() == '.' ? "0" + mantissa : mantissa;
        if (at_ < text_.size() && (text_[at_] == 'e' || text_[at_] == 'E')) {
            std::size_t end = at_ + 1;
            if (end < text_.size() && (text_[end] == '+' || text_[end] == '-')) ++end;
            const std::size_t first = end;
            while (end < text_.size() && digit(text_[end])) ++end;
            if (end > first) {
                std::string exponent(text_.substr(at_, end - at_));
                std::erase(exponent, '+');
                digits += exponent;
                at_ = end;
            }
        }
        double value = 0;
        const auto [end, error] = std::from_chars(digits.data(), digits.data() + digits.size(), value);
        if (error != std::errc() || end != digits.data() + digits.size() || !std::isfinite(value))
            refuse(text_, start, quoted(text_.substr(start)) + " is outside the numbers that can be computed with",
                   std::string(expected_text(unit_)));
        return value;
    }

    [[nodiscard]] bool three_digits(std::size_t from) const {
        if (from + 3 > text_.size()) return false;
        for (std::size_t k = from; k < from + 3; ++k)
            if (!digit(text_[k])) return false;
        return from + 3 == text_.size() || !digit(text_[from + 3]);
    }

    double without_unit(double number, std::size_t end) {
        if (unit_ == Unit::none || unit_ == Unit::fraction) return number;
        if (bare_allowed_) return unit_ == Unit::celsius ? checked_celsius(number) : number;
        const std::string written(text_.substr(0, end));
        std::string either = written + " " + std::string(unit_symbol(unit_));
        if (prefixes_of(unit_) && number != 0) {
            const std::string scaled = format_quantity(number, unit_, 6);
            if (scaled != either) either += " or " + scaled;
        }
        refuse(text_, 0, written + " has no unit. Write " + either + ".", std::string(expected_text(unit_)));
    }

    double in_base(double value, std::string_view rest) {
        if (unit_ == Unit::celsius) return celsius_ ? checked_celsius(value) : checked_kelvin(value);
        if (!std::isfinite(value))
            refuse(text_, 0, quoted(text_) + " is outside the numbers that can be computed with", std::string(expected_text(unit_)));
        (void)rest;
        return value;
    }

    double checked_celsius(double value) { return checked_kelvin(value + kCelsiusZero); }
    double checked_kelvin(double value) {
        if (!(value >= 0)) refuse(text_, 0, quoted(text_) + " is below absolute zero", std::string(expected_text(unit_)));
        return value;
    }

    /// What one of the unit as written is in base units.
    double factor(std::string_view rest) {
        if (unit_ == Unit::celsius) {
            for (const std::string_view name : {"°C", "degC", "C", "℃"})
                if (rest == name) return 1;
            if (rest == "K") {
                celsius_ = false;
                return 1;
            }
        }
        for (const UnitSpelling& spelling : unit_spellings())
            if (spelling.unit == unit_ && !spelling.prefixed && rest == spelling.text) return spelling.factor;
        double longest = 0;
        for (const UnitSpelling& spelling : unit_spellings()) {
            if (spelling.unit != unit_ || !spelling.prefixed || !rest.ends_with(spelling.text)) continue;
            const std::string_view prefix = rest.substr(0, rest.size() - spelling.text.size());
            if (prefix.empty()) return spelling.factor;
            if (const auto power = prefix_factor(prefix)) longest = *power * spelling.factor;
        }
        if (longest > 0) return longest;
        if (prefixes_of(unit_) && unit_ != Unit::celsius)  // "470u" where the unit is known
            if (const auto power = prefix_factor(rest)) return *power;
        for (const UnitSpelling& spelling : unit_spellings()) {  // another unit's?
            if (spelling.unit == unit_ || !rest.ends_with(spelling.text)) continue;
            const std::string_view prefix = rest.substr(0, rest.size() - spelling.text.size());
            if (!prefix.empty() && !(spelling.prefixed && prefix_factor(prefix))) continue;
            refuse(text_, at_, quoted(rest) + " is " + std::string(unit_noun(spelling.unit)) + ", not " + std::string(unit_noun(unit_)),
                   std::string(expected_text(unit_)));
        }
        for (const UnitSpelling& spelling : unit_spellings())
            if (spelling.unit == unit_ && spelling.prefixed && rest.ends_with(spelling.text) && !spelling.text.empty())
                refuse(text_, at_,
                       "unknown prefix " + quoted(rest.substr(0, rest.size() - spelling.text.size())) + " before " +
                           std::string(spelling.text),
                       std::string(expected_text(unit_)));
        refuse(text_, at_, "unknown unit " + quoted(rest), std::string(expected_text(unit_)));
    }

    /// IEC 60062: a letter in the place of the decimal mark (4R7, 2u2, 17m5, R015, p33).
    std::optional<double> rkm() {
        if (!prefixes_of(unit_) || unit_ == Unit::celsius) return std::nullopt;
        std::string_view body = text_.substr(at_);
        while (!body.empty() && trailing_blank(body)) body.remove_suffix(trailing_blank(body));
        for (const UnitSpelling& spelling : unit_spellings())  // "4k7Ω" is seen too
            if (spelling.unit == unit_ && !spelling.text.empty() && body.size() > spelling.text.size() + 1 &&
                body.ends_with(spelling.text) && digit(body[body.size() - spelling.text.size() - 1])) {
                body.remove_suffix(spelling.text.size());
                break;
            }
        std::size_t letter = 0;
        while (letter < body.size() && digit(body[letter])) ++letter;
        if (letter == body.size()) return std::nullopt;
        std::string_view mark;
        for (const std::string_view candidate : {"µ", "μ"})
            if (body.substr(letter).starts_with(candidate)) mark = body.substr(letter, candidate.size());
        if (mark.empty()) mark = body.substr(letter, 1);
        const std::string_view fraction = body.substr(letter + mark.size());
        if (fraction.empty()) {
            // "470R": the letter stands behind the number; only R, the others are ordinary prefixes.
            if (letter == 0 || mark != "R" || unit_ != Unit::ohm) return std::nullopt;
        }
        for (const char c : fraction)
            if (!digit(c)) return std::nullopt;
        double power = 1;
        if (mark == "R") {
            if (unit_ != Unit::ohm) return std::nullopt;
        } else if (mark == "E" || mark == "e") {
            return std::nullopt;
        } else if (mark == "F" && unit_ == Unit::farad) {
            power = 1;
        } else if (mark == "K") {
            power = 1e3;
        } else if (const auto known = prefix_factor(mark)) {
            power = *known;
        } else {
            return std::nullopt;
        }
        if (letter == 0 && fraction.empty()) return std::nullopt;
        const std::string plain = (letter ? std::string(body.substr(0, letter)) : "0") + "." + std::string(fraction.empty() ? "0" : fraction);
        double value = 0;
        std::from_chars(plain.data(), plain.data() + plain.size(), value);
        return scaled(value, power);
    }

    /// Division keeps 17.5e-3 the same double as 17.5/1000, which multiplication does not.
    static double scaled(double value, double power) { return power < 1 ? value / std::round(1 / power) : value * power; }
};

}  // namespace

std::string lower_case(std::string_view text) {
    std::string out(text);
    for (char& c : out)
        if (c >= 'A' && c <= 'Z') c = static_cast<char>(c - 'A' + 'a');
    return out;
}

double parse_quantity(std::string_view text, Unit unit, bool bare_allowed) { return Reader(text, unit, bare_allowed).read(); }

Range parse_range(std::string_view text, Unit unit, bool bare_allowed) {
    const std::size_t dots = text.find("..");
    if (dots == std::string_view::npos) {
        const double value = parse_quantity(text, unit, bare_allowed);
        return {value, value};
    }
    const auto empty = [](std::string_view part) {
        return part.find_first_not_of(" \t") == std::string_view::npos;
    };
    const std::string_view low = text.substr(0, dots), high = text.substr(dots + 2);
    const double infinite = std::numeric_limits<double>::infinity();
    Range range{-infinite, infinite};
    if (empty(low) && empty(high)) refuse(text, 0, "the range has no end", std::string(expected_text(unit)));
    if (!empty(high)) {
        try {
            range.highest = parse_quantity(high, unit, bare_allowed);
        } catch (InputError& error) {
            for (Fault& fault : error.faults) fault.place.column += character(text, dots + 2) - 1;
            throw InputError(error.faults);
        }
    }
    if (!empty(low)) {
        // "10.5 .. 15 V": the unit stands once, behind the upper end.
        bool bare = bare_allowed;
        if (!bare && !empty(high)) {
            const std::size_t last = low.find_last_not_of(" \t");
            if (digit(low[last])) {
                std::size_t unit_at = high.size();
                while (unit_at > 0 && !digit(high[unit_at - 1])) --unit_at;
                range.lowest = parse_quantity(std::string(low.substr(0, last + 1)) + std::string(high.substr(unit_at)), unit, false);
                bare = true;
            } else {
                range.lowest = parse_quantity(low, unit, false);
            }
        } else {
            range.lowest = parse_quantity(low, unit, bare_allowed);
        }
    }
    if (!(range.lowest <= range.highest))
        refuse(text, 0,
               "the lowest, " + format_quantity(range.lowest, unit) + ", is above the highest, " +
                   format_quantity(range.highest, unit),
               "the lower value first");
    return range;
}

std::string nearest_word(std::string_view word, const std::vector<std::string>& known) {
    const std::string from = lower_case(word);
    std::string best;
    std::size_t least = std::max<std::size_t>(2, word.size() / 3) + 1;
    for (const std::string& candidate : known) {
        const std::string to = lower_case(candidate);
        // Edit distance with swaps of neighbours (optimal string alignment).
        std::vector<std::vector<std::size_t>> d(from.size() + 1, std::vector<std::size_t>(to.size() + 1));
        for (std::size_t i = 0; i <= from.size(); ++i) d[i][0] = i;
        for (std::size_t j = 0; j <= to.size(); ++j) d[0][j] = j;
        for (std::size_t i = 1; i <= from.size(); ++i)
            for (std::size_t j = 1; j <= to.size(); ++j) {
                d[i][j] = std::min({d[i - 1][j] + 1, d[i][j - 1] + 1, d[i - 1][j - 1] + (from[i - 1] != to[j - 1])});
                if (i > 1 && j > 1 && from[i - 1] == to[j - 2] && from[i - 2] == to[j - 1])
                    d[i][j] = std::min(d[i][j], d[i - 2][j - 2] + 1);
            }
        const std::size_t distance = d[from.size()][to.size()];
        if (distance < least && distance < std::max(from.size(), to.size())) {
            least = distance;
            best = candidate;
        }
    }
    return best;
}

}  // namespace binwright
