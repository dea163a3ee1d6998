// SPDX-License-Identifier: GPL-3.0-or-later
// The rulebooks that came with the program, and which rules of one apply to a part.
#include <algorithm>
#include <deque>

#include "engine/embedded.hpp"
#include "engine/rule/stresses.hpp"

namespace binwright {

std::span<const EmbeddedFile> shipped_rulebooks();

namespace {

const Rulebook* find_in(const auto& books, std::string_view name) {
    for (const Rulebook& book : books)
        if (book.name == name || (book.stem == name && book.level == book.usual_level)) return &book;
    return nullptr;
}

/// Several kinds named are as special as one: 0 for a family, 1 for kinds of it.
int specificity(const Rule& rule) { return rule.selects.find('/') != std::string::npos; }

/// Whether two rules can stand in for each other: on one stress, or both on the part as a whole.
bool same_subject(const Rule& a, const Rule& b) { return a.of_part == b.of_part && (a.of_part || a.stress == b.stress); }

}  // namespace

const std::vector<Rulebook>& rulebooks() {
    static const std::vector<Rulebook> books = [] {
        std::deque<Rulebook> read;  // whose elements stay where they are
        const FindBook find = [&](const std::string& name) { return find_in(read, name); };
        for (const bool based : {false, true})
            for (const EmbeddedFile& file : shipped_rulebooks()) {
                if ((file.text.find("\nbased_on") != std::string_view::npos) != based) continue;
                Rulebook usual = read_rulebook(file.text, std::string(file.name), {}, find);
                for (const std::string& level : usual.levels)
                    if (level != usual.level) read.push_back(read_rulebook(file.text, std::string(file.name), level, find));
                read.push_back(std::move(usual));
            }
        std::vector<Rulebook> out(read.begin(), read.end());
        std::stable_sort(out.begin(), out.end(), [](const Rulebook& a, const Rulebook& b) {
            return std::pair(a.name != "house", a.name) < std::pair(b.name != "house", b.name);
        });
        return out;
    }();
    return books;
}

const Rulebook* find_rulebook(std::string_view name) { return find_in(rulebooks(), name); }

std::vector<Applied> applied_rules(const Rulebook& book, const Part& part, std::optional<double> ohms_per_volt) {
    const std::string own = selector(part);
    std::vector<Applied> fitting;
    for (const Rule& rule : book.rules) {
        if (!selects(rule.selects, own)) continue;
        if (!rule.charged_by.empty() && (rule.charged_by == "low impedance") != (ohms_per_volt.value_or(0) < kLowImpedance)) continue;
        Applied one{&rule, {}, {}};
        bool here = true;
        for (const Condition& condition : rule.where) {
            const int answer = truth(condition, part);
            here = here && answer != 0;
            if (answer < 0 && one.unknown.empty()) one.unknown = condition.figure ? std::string(info(*condition.figure).name) : condition.attribute;
        }
        if (here) fitting.push_back(std::move(one));
    }
    // A rule goes before another that it names, and before a more general one of its stem; one that may not apply does not.
    const auto before = [](const Applied& a, const Applied& b) {
        if (!a.unknown.empty() || a.rule == b.rule || !same_subject(*a.rule, *b.rule)) return false;
        return a.rule->instead_of == b.rule->id || (specificity(*a.rule) > specificity(*b.rule) && id_stem(*a.rule) == id_stem(*b.rule));
    };
    std::vector<Applied> out;
    for (const Applied& one : fitting)
        if (std::none_of(fitting.begin(), fitting.end(), [&](const Applied& other) { return before(other, one) && !before(one, other); })) out.push_back(one);
    // Rules that go before each other in a ring would all be gone: then all of them stay, and the tightest binds.
    const std::vector<Applied> left = out;
    for (const Applied& one : fitting)
        if (std::none_of(left.begin(), left.end(), [&](const Applied& other) { return same_subject(*one.rule, *other.rule); })) out.push_back(one);
    for (Applied& one : out)
        for (const Applied& other : fitting)
            if (before(one, other)) one.before.push_back(other.rule);
    return out;
}

std::vector<const Rule*> rules_for(const Rulebook& book, const Part& part) {
    std::vector<const Rule*> out;
    for (const Applied& one : applied_rules(book, part)) out.push_back(one.rule);
    return out;
}

}  // namespace binwright
