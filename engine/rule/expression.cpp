// SPDX-License-Identifier: GPL-3.0-or-later
// Expressions of figures that stand in place of a rating, and conditions on figures that decide whether a rule applies.
#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <map>

#include "engine/rule/stresses.hpp"

namespace binwright {
namespace {

/// Exponents of volt, ampere, kelvin and second: enough for every unit that a figure has.
using Dimension = std::array<int, 4>;

std::optional<Dimension> dimension_of(Unit unit) {
    switch (unit) {
        case Unit::none:
        case Unit::fraction: return Dimension{0, 0, 0, 0};
        case Unit::volt: return Dimension{1, 0, 0, 0};
        case Unit::ampere: return Dimension{0, 1, 0, 0};
        case Unit::ohm: return Dimension{1, -1, 0, 0};
        case Unit::siemens: return Dimension{-1, 1, 0, 0};
        case Unit::watt: return Dimension{1, 1, 0, 0};
        case Unit::joule: return Dimension{1, 1, 0, 1};
        case Unit::coulomb: return Dimension{0, 1, 0, 1};
        case Unit::farad: return Dimension{-1, 1, 0, 1};
        case Unit::henry: return Dimension{1, -1, 0, 1};
        case Unit::second: return Dimension{0, 0, 0, 1};
        case Unit::hertz: return Dimension{0, 0, 0, -1};
        case Unit::celsius:
        case Unit::kelvin: return Dimension{0, 0, 1, 0};
        case Unit::per_kelvin: return Dimension{0, 0, -1, 0};
        case Unit::kelvin_per_watt: return Dimension{-1, -1, 1, 0};
        case Unit::ampere_per_second: return Dimension{0, 1, 0, -1};
        case Unit::ampere2_second: return Dimension{0, 2, 0, 1};
        default: return std::nullopt;
    }
}

class Parser {
  public:
    Parser(std::string_view text, Family family) : text_(text), family_(family) {}

    Expression run(Unit wanted) {
        const Value value = sum();
        if (at_ < text_.size()) fail("\"" + std::string(text_.substr(at_)) + "\" is left over", "an operator + - * / between figures");
        const bool warm = value.point;
        if (value.dimension != dimension_of(wanted) || warm) {
            at_ = 0;
            fail("\"" + std::string(text_) + "\" does not come out as " + std::string(expected_text(wanted)).substr(0, std::string(expected_text(wanted)).find(" such")), "");
        }
        out_.text = std::string(text_);
        return std::move(out_);
    }

  private:
    struct Value {
        std::optional<Dimension> dimension;
        bool point = false;  ///< a temperature on its scale, not a difference
    };

    [[noreturn]] void fail(std::string message, std::string expected) {
        throw InputError(Fault{{"", 0, static_cast<int>(at_) + 1}, "", std::move(message), std::move(expected)});
    }
    void blanks() {
        while (at_ < text_.size() && text_[at_] == ' ') ++at_;
    }

    Value sum() {
        Value left = product();
        for (blanks(); at_ < text_.size() && (text_[at_] == '+' || text_[at_] == '-'); blanks()) {
            const char sign = text_[at_++];
            const std::size_t here = at_;
            const Value right = product();
            if (left.dimension != right.dimension) {
                at_ = here;
                fail(std::string("what stands on both sides of ") + sign + " differs in its unit", "");
            }
            left.point = sign == '-' ? left.point && !right.point : left.point || right.point;
            out_.steps.push_back({sign, {}, 0});
        }
        return left;
    }

    Value product() {
        Value left = factor();
        for (blanks(); at_ < text_.size() && (text_[at_] == '*' || text_[at_] == '/'); blanks()) {
            const char sign = text_[at_++];
            const std::size_t here = at_;
            const Value right = factor();
            if (left.point || right.point || !left.dimension || !right.dimension) {
                at_ = here;
                fail("a temperature is no factor; only a difference of two is", "(T_jmax - 25 °C)");
            }
            for (std::size_t k = 0; k < left.dimension->size(); ++k) (*left.dimension)[k] += (sign == '*' ? 1 : -1) * (*right.dimension)[k];
            out_.steps.push_back({sign, {}, 0});
        }
        return left;
    }

    Value factor() {
        blanks();
        if (at_ < text_.size() && text_[at_] == '(') {
            ++at_;
            const Value inside = sum();
            blanks();
            if (at_ >= text_.size() || text_[at_] != ')') fail("a bracket is not closed", ")");
            ++at_;
            return inside;
        }
        // A figure: the longest of its spellings that stands here.
        std::size_t longest = 0;
        std::optional<Symbol> figure;
        for (const SymbolInfo& one : symbols()) {
            if (!find_symbol(one.name, family_)) continue;
            for (const std::string_view name : {one.name, one.plain})
                if (name.size() > longest && text_.substr(at_).starts_with(name)) {
                    longest = name.size();
                    figure = one.symbol;
                }
        }
        if (figure) {
            at_ += longest;
            out_.steps.push_back({'f', *figure, 0});
            return {dimension_of(info(*figure).unit), info(*figure).unit == Unit::celsius};
        }
        // Or a quantity, up to the next operator that stands between blanks, or a bracket.
        std::size_t end = at_;
        while (end < text_.size() && text_[end] != ')' &&
               !(text_[end] == ' ' && end + 2 < text_.size() && std::string_view("+-*/").find(text_[end + 1]) != std::string_view::npos && text_[end + 2] == ' '))
            ++end;
        const std::string_view quantity = text_.substr(at_, end - at_);
        for (const Unit unit : {Unit::none, Unit::celsius, Unit::kelvin, Unit::volt, Unit::ampere, Unit::ohm, Unit::watt, Unit::kelvin_per_watt}) {
            try {
                const double value = parse_quantity(quantity, unit, unit == Unit::none);
                at_ = end;
                out_.steps.push_back({'n', {}, value});
                return {dimension_of(unit), unit == Unit::celsius};
            } catch (const InputError&) {
            }
        }
        std::vector<std::string> names;
        for (const SymbolInfo& one : symbols())
            if (find_symbol(one.name, family_)) names.emplace_back(one.name);
        const std::string near = nearest_word(quantity, names);
        fail("\"" + std::string(quantity) + "\" is neither a figure of a " + std::string(to_string(family_)) + " nor a quantity" +
                 (near.empty() ? "" : "; did you mean " + near + "?"),
             "a figure such as " + names.front());
    }

    std::string_view text_;
    Family family_;
    std::size_t at_ = 0;
    Expression out_;
};

std::optional<double> end_of(const Part& part, Symbol symbol, bool worst) {
    std::optional<double> out;
    for (const Figure& figure : part.figures) {
        if (figure.symbol != symbol) continue;
        const double value = (worst ? figure.value.worst : figure.value.best) / (figure.both_legs ? 2 : 1);
        const bool higher = info(symbol).better != Better::lower;
        if (!out || (higher ? value < *out : value > *out)) out = value;
    }
    return out;
}

std::string folded(std::string_view text) {
    std::string out(text);
    std::transform(out.begin(), out.end(), out.begin(), [](char c) { return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c; });
    return out;
}

}  // namespace

Expression parse_expression(std::string_view text, Family family, Unit unit) { return Parser(text, family).run(unit); }

std::optional<double> value_of(const Expression& expression, const Part& part, bool least, std::string& missing) {
    std::vector<Symbol> figures;
    for (const Expression::Step& step : expression.steps)
        if (step.what == 'f' && std::find(figures.begin(), figures.end(), step.figure) == figures.end()) figures.push_back(step.figure);
    for (const Symbol symbol : figures)
        if (!end_of(part, symbol, true)) {
            missing = info(symbol).name;
            return std::nullopt;
        }
    double out = least ? std::numeric_limits<double>::infinity() : -std::numeric_limits<double>::infinity();
    for (unsigned ends = 0; ends < 1u << figures.size(); ++ends) {
        std::vector<double> stack;
        for (const Expression::Step& step : expression.steps) {
            if (step.what == 'n') {
                stack.push_back(step.number);
            } else if (step.what == 'f') {
                const auto k = static_cast<std::size_t>(std::find(figures.begin(), figures.end(), step.figure) - figures.begin());
                stack.push_back(*end_of(part, step.figure, ends >> k & 1u));
            } else {
                const double b = stack.back();
                stack.pop_back();
                double& a = stack.back();
                a = step.what == '+' ? a + b : step.what == '-' ? a - b : step.what == '*' ? a * b : a / b;
            }
        }
        if (!std::isfinite(stack.back())) return std::numeric_limits<double>::quiet_NaN();
        out = least ? std::min(out, stack.back()) : std::max(out, stack.back());
    }
    return out;
}

int truth(const Condition& condition, const Part& part) {
    if (!condition.figure) {
        const std::string own = folded(attribute(part, condition.attribute));
        if (own.empty()) return -1;
        return (own == folded(condition.word)) == (condition.compare == "=") ? 1 : 0;
    }
    const auto worst = end_of(part, *condition.figure, true), best = end_of(part, *condition.figure, false);
    if (!worst || !best) return -1;
    const auto test = [&](double value) {
        const double near = 1e-9 * std::abs(condition.value);
        const double apart = std::abs(value - condition.value) <= near ? 0 : value - condition.value;
        if (condition.compare == ">=") return apart >= 0;
        if (condition.compare == "<=") return apart <= 0;
        if (condition.compare == ">") return apart > 0;
        if (condition.compare == "<") return apart < 0;
        return (apart == 0) == (condition.compare == "=");
    };
    const bool a = test(*worst), b = test(*best);
    return a != b ? -1 : a ? 1 : 0;
}

}  // namespace binwright
