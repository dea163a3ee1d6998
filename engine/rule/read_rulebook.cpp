// SPDX-License-Identifier: GPL-3.0-or-later
// A rulebook's text into rules: every fault at once, each with its line and column and what was expected there.
#include <algorithm>
#include <cmath>
#include <map>
#include <set>
#include <tuple>

#include "engine/converter/item.hpp"
#include "engine/converter/keys.hpp"
#include "engine/rule/stresses.hpp"

namespace binwright {
namespace {

std::string ticked(std::string_view text) { return "`" + std::string(text) + "`"; }

std::string listed(const std::vector<std::string>& words) {
    std::string out;
    for (std::size_t k = 0; k < words.size(); ++k) out += (k == 0 ? "" : k + 1 == words.size() ? " or " : ", ") + words[k];
    return out;
}

const std::vector<std::string> kTopKeys = {"kind", "format", "name", "title", "source", "allowances", "rule"};
const std::vector<std::string> kRuleKeys = {"id",     "title", "for",     "stress", "rating", "requirement", "at_most",
                                            "below", "at_least", "why",    "source", "clause", "known"};
const std::vector<std::string> kKnown = {"seen", "seen, secondary", "from memory", "common practice"};

struct AllowanceKey {
    std::string_view key;
    Unit unit;
    double lowest, highest;
    double Allowances::*slot;
};
constexpr AllowanceKey kAllowances[] = {
    {"switch_overshoot", Unit::fraction, 0, 5, &Allowances::switch_overshoot},
    {"rectifier_overshoot", Unit::fraction, 0, 5, &Allowances::rectifier_overshoot},
    {"sharing", Unit::fraction, 0, 1, &Allowances::sharing},
    {"aged_capacitance", Unit::fraction, 0.01, 1, &Allowances::aged_capacitance},
    {"aged_esr", Unit::none, 1, 100, &Allowances::aged_esr},
    {"measurement_expiry", Unit::second, 0, 100 * 365.25 * 86400, &Allowances::measurement_expiry},
};

std::vector<std::string> technologies(Family family) {
    for (const AttributeInfo& attribute : attributes())
        if (attribute.name == "technology" && (attribute.families & bit(family))) return split_words(attribute.words);
    return {};
}

bool has_stress(const StressRow& row, std::optional<Family> family) {
    if (!family) return row.of_converter;
    return *family == Family::switch_ ? row.in_switch : *family == Family::rectifier ? row.in_rectifier : row.in_capacitor;
}

class Reader {
  public:
    Reader(const std::string& file, bool whole, std::vector<Fault>& faults) : whole_(whole), faults_(faults) { book_.name = stem(file); }

    Rulebook run(const Item& root) {
        for (const Member& member : root.members) {
            const Item& item = member.value;
            if (member.key == "kind") {
                if (item.kind != Item::Kind::text || item.text != "rulebook")
                    fault(item, "kind", "this file is not a rulebook", "kind = \"rulebook\"");
            } else if (member.key == "format") {
                if (item.kind != Item::Kind::integer || item.number != 1)
                    fault(item, "format", "this program reads rulebooks of format 1", "format = 1");
            } else if (member.key == "name") {
                if (const auto text = text_of(item, "name")) book_.name = *text;
            } else if (member.key == "title") {
                if (const auto text = text_of(item, "title")) book_.title = *text;
            } else if (member.key == "source") {
                if (const auto text = text_of(item, "source")) book_.text_source = *text;
            } else if (member.key == "allowances") {
                allowances(item);
            } else if (member.key == "rule") {
                rules(item);
            } else {
                unknown(member, "", kTopKeys);
            }
        }
        if (whole_ && !root.find("kind")) fault(root, "kind", "the file does not say what it is", "kind = \"rulebook\"");
        if (whole_ && !root.find("format")) fault(root, "format", "the file does not say its format", "format = 1");
        if (whole_ && !root.find("rule") && !misspelt_.contains("rule"))
            fault(root, "rule", "the rulebook has no rule", "a table [[rule]] for each rule");
        return std::move(book_);
    }

  private:
    static std::string stem(const std::string& file) {
        const auto slash = file.find_last_of("/\\");
        std::string name = slash == std::string::npos ? file : file.substr(slash + 1);
        if (name.ends_with(".toml")) name.resize(name.size() - 5);
        return name;
    }

    void fault(const Item& item, const std::string& field, std::string message, std::string expected = "") {
        faults_.push_back({item.place, field, std::move(message), std::move(expected)});
    }

    void unknown(const Member& member, const std::string& path, const std::vector<std::string>& known) {
        const std::string near = nearest_word(member.key, known);
        std::string message = "unknown key " + ticked(member.key) + (path.empty() ? "" : " in [" + path + "]");
        if (!near.empty()) {
            message += "; did you mean " + ticked(near) + "?";
            misspelt_.insert(path.empty() ? near : path + "." + near);
        }
        faults_.push_back({member.place, path.empty() ? member.key : path + "." + member.key, std::move(message), "one of " + listed(known)});
    }

    std::optional<std::string> text_of(const Item& item, const std::string& field) {
        if (item.kind != Item::Kind::text) {
            fault(item, field, ticked(field) + " is a text in quotes, not " + std::string(kind_name(item.kind)));
            return std::nullopt;
        }
        if (item.text.find_first_not_of(" \t\n") == std::string::npos) {
            fault(item, field, ticked(field) + " is empty");
            return std::nullopt;
        }
        return item.text;
    }

    /// A quantity in quotes, or a bare number where its unit is a pure one.
    std::optional<double> quantity(const Item& item, const std::string& field, Unit unit) {
        const bool pure = unit == Unit::none || unit == Unit::fraction;
        if (pure && (item.kind == Item::Kind::integer || item.kind == Item::Kind::number)) {
            if (std::isfinite(item.number)) return item.number;
            fault(item, field, ticked(field) + " is not a number", std::string(expected_text(unit)));
            return std::nullopt;
        }
        if (item.kind != Item::Kind::text) {
            fault(item, field, ticked(field) + (pure ? " is a number, not " : " is a text in quotes with its unit, not ") + std::string(kind_name(item.kind)),
                  std::string(expected_text(unit)));
            return std::nullopt;
        }
        try {
            return parse_quantity(item.text, unit, pure);
        } catch (const InputError& error) {
            for (Fault one : error.faults) {
                one.place = {item.place.file, item.place.line,
                             item.text_column ? *item.text_column + std::max(0, one.place.column - 1) : item.place.column};
                one.field = field;
                faults_.push_back(std::move(one));
            }
            return std::nullopt;
        }
    }

    void allowances(const Item& table) {
        if (table.kind != Item::Kind::table) return fault(table, "allowances", "`allowances` is a table", "[allowances] with its keys below");
        for (const Member& member : table.members) {
            const auto key = std::find_if(std::begin(kAllowances), std::end(kAllowances), [&](const AllowanceKey& one) { return one.key == member.key; });
            if (key == std::end(kAllowances)) {
                std::vector<std::string> known;
                for (const AllowanceKey& one : kAllowances) known.emplace_back(one.key);
                unknown(member, "allowances", known);
                continue;
            }
            const std::string field = "allowances." + member.key;
            const auto value = quantity(member.value, field, key->unit);
            if (!value) continue;
            if (!(*value >= key->lowest) || !(*value <= key->highest))
                fault(member.value, field,
                      ticked(field) + " is " + format_quantity(*value, key->unit) + ", outside " + format_quantity(key->lowest, key->unit) + " to " +
                          format_quantity(key->highest, key->unit));
            else
                book_.allowances.*(key->slot) = *value;
        }
    }

    void rules(const Item& list) {
        if (list.kind != Item::Kind::array) return fault(list, "rule", "`rule` is a list of tables", "[[rule]] with its keys below, once for each rule");
        for (const Item& item : list.items) {
            if (item.kind != Item::Kind::table)
                fault(item, "rule", "`rule` is a list of tables, not of " + std::string(kind_name(item.kind)), "[[rule]] with its keys below");
            else
                one_rule(item);
        }
        if (list.items.empty()) fault(list, "rule", "the rulebook has no rule", "a table [[rule]] for each rule");
    }

    void one_rule(const Item& table) {
        Rule rule;
        rule.place = table.place;
        misspelt_.clear();
        std::map<std::string, const Item*> at;
        for (const Member& member : table.members) {
            if (std::find(kRuleKeys.begin(), kRuleKeys.end(), member.key) == kRuleKeys.end())
                unknown(member, "rule", kRuleKeys);
            else
                at[member.key] = &member.value;
        }
        const auto text = [&](const char* key, bool needed, const char* expected) -> std::string {
            const auto found = at.find(key);
            if (found != at.end()) return text_of(*found->second, std::string("rule.") + key).value_or("");
            if (needed && whole_ && !misspelt_.contains(std::string("rule.") + key))
                fault(table, std::string("rule.") + key, (rule.id.empty() ? "this rule" : "the rule " + ticked(rule.id)) + " gives no " + ticked(key), expected);
            return {};
        };
        rule.id = text("id", true, "id = \"aluminium-voltage\"");
        if (!rule.id.empty()) {
            const bool plain = std::all_of(rule.id.begin(), rule.id.end(), [](char c) { return (c >= 'a' && c <= 'z') || (c >= '0' && c <= '9') || c == '-'; });
            if (!plain) fault(*at["id"], "rule.id", ticked(rule.id) + " is no id", "small letters, digits and -");
            const auto [earlier, fresh] = seen_.emplace(rule.id, at["id"]->place.line);
            if (!fresh) fault(*at["id"], "rule.id", "a rule " + ticked(rule.id) + " stands in line " + std::to_string(earlier->second) + " already");
        }
        rule.title = text("title", false, "");
        if (rule.title.empty()) {
            rule.title = rule.id;
            std::replace(rule.title.begin(), rule.title.end(), '-', ' ');
        }
        rule.selects = text("for", true, "for = \"capacitor/aluminium\"");
        bool family_known = false;
        const auto family = rule.selects.empty() ? std::nullopt : family_of_selector(rule.selects, *at["for"], family_known);
        const std::string stress = text("stress", true, "stress = \"voltage_peak_repetitive\"");
        const std::size_t before = faults_.size();
        if (!stress.empty()) take_stress(rule, stress, *at["stress"], family, family_known);
        const bool sound = !stress.empty() && faults_.size() == before;
        take_rating(rule, at, family, family_known, sound);
        take_bound(rule, table, at, sound);
        rule.why = text("why", true, "the reason, in a sentence");
        rule.source = text("source", true, "source = \"common practice\", or a standard with its clause");
        rule.clause = text("clause", false, "");
        rule.known = text("known", !rule.source.empty() && rule.source != "common practice", "known = \"seen\", \"seen, secondary\" or \"from memory\"");
        if (rule.known.empty() && rule.source == "common practice") rule.known = rule.source;
        if (!rule.known.empty() && std::find(kKnown.begin(), kKnown.end(), rule.known) == kKnown.end())
            fault(*at["known"], "rule.known", ticked(rule.known) + " is no way of knowing a value", "one of " + listed(kKnown));
        book_.rules.push_back(std::move(rule));
    }

    /// @returns the family, empty for "converter"
    std::optional<Family> family_of_selector(const std::string& selects, const Item& item, bool& known) {
        const auto slash = selects.find('/');
        const std::string name = selects.substr(0, slash);
        if (selects == "converter") {
            known = true;
            return std::nullopt;
        }
        const auto family = find_family(name);
        if (!family) {
            const std::vector<std::string> words = {"switch", "rectifier", "capacitor", "converter"};
            const std::string near = nearest_word(name, words);
            fault(item, "rule.for", "there is no family " + ticked(name) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"), "one of " + listed(words));
            return std::nullopt;
        }
        known = true;
        if (slash == std::string::npos) return family;
        const std::string technology = selects.substr(slash + 1);
        const std::vector<std::string> words = technologies(*family);
        if (!words.empty() && std::find(words.begin(), words.end(), technology) == words.end()) {
            const std::string near = nearest_word(technology, words);
            fault(item, "rule.for", "a " + name + " has no technology " + ticked(technology) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"),
                  "one of " + listed(words));
        }
        return family;
    }

    void take_stress(Rule& rule, const std::string& name, const Item& item, std::optional<Family> family, bool family_known) {
        std::vector<std::string> words;
        for (const StressRow& row : stress_rows())
            if (!family_known || has_stress(row, family)) words.emplace_back(row.info.name);
        const auto stress = find_stress(name);
        if (!stress) {
            const std::string near = nearest_word(name, words);
            fault(item, "rule.stress", "there is no stress " + ticked(name) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"), "one of " + listed(words));
            return;
        }
        if (family_known && !has_stress(stress_row(*stress), family)) {
            fault(item, "rule.stress", "a " + (family ? std::string(to_string(*family)) : "converter") + " has no stress " + ticked(name), "one of " + listed(words));
            return;
        }
        rule.stress = *stress;
    }

    void take_rating(Rule& rule, const std::map<std::string, const Item*>& at, std::optional<Family> family, bool family_known, bool stress_known) {
        const auto rating = at.find("rating"), requirement = at.find("requirement");
        if (rating != at.end() && requirement != at.end())
            fault(*requirement->second, "rule.requirement", "a rule holds a stress to a rating or to a requirement, not to both");
        if (requirement != at.end()) {
            if (const auto name = text_of(*requirement->second, "rule.requirement")) {
                std::vector<std::string> words;
                bool fits = false;
                for (const RequirementInfo& one : requirements()) {
                    words.emplace_back(one.name);
                    fits = fits || (one.name == *name && (!stress_known || one.stress == rule.stress));
                }
                if (!fits) {
                    const std::string near = nearest_word(*name, words);
                    const bool exists = std::find(words.begin(), words.end(), *name) != words.end();
                    fault(*requirement->second, "rule.requirement",
                          exists ? "the requirement " + ticked(*name) + " is not one of " + std::string(info(rule.stress).meaning)
                                 : "there is no requirement " + ticked(*name) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"),
                          "one of " + listed(words));
                }
                rule.requirement = *name;
            }
        }
        if (rating == at.end() || !family_known) return;
        const auto name = text_of(*rating->second, "rule.rating");
        if (!name) return;
        std::vector<std::string> words;
        if (family)
            for (const SymbolInfo& one : symbols())
                if (one.rating && find_symbol(one.name, *family)) words.emplace_back(one.name);
        const auto symbol = family ? find_symbol(*name, *family) : std::nullopt;
        if (!symbol || !info(*symbol).rating) {
            const std::string near = nearest_word(*name, words);
            fault(*rating->second, "rule.rating",
                  "a " + (family ? std::string(to_string(*family)) : "converter") + " has no rating " + ticked(*name) + (near.empty() ? "" : "; did you mean " + ticked(near) + "?"),
                  words.empty() ? "" : "one of " + listed(words));
            return;
        }
        if (stress_known && info(*symbol).unit != info(rule.stress).unit) {
            fault(*rating->second, "rule.rating",
                  std::string(info(*symbol).name) + " is no limit to " + ticked(info(rule.stress).name) + ": their units differ",
                  "a rating in " + std::string(unit_symbol(info(rule.stress).unit)));
            return;
        }
        rule.rating = symbol;
    }

    void take_bound(Rule& rule, const Item& table, const std::map<std::string, const Item*>& at, bool stress_known) {
        std::vector<std::string> given;
        for (const char* key : {"at_most", "below", "at_least"})
            if (at.contains(key)) given.emplace_back(key);
        if (given.empty()) {
            if (whole_ && !misspelt_.contains("rule.at_most") && !misspelt_.contains("rule.below") && !misspelt_.contains("rule.at_least"))
                fault(table, "rule.at_most", (rule.id.empty() ? "this rule" : "the rule " + ticked(rule.id)) + " has no bound", "one of at_most, below or at_least");
            return;
        }
        if (given.size() > 1)
            return fault(*at.at(given[1]), "rule." + given[1], "a rule has one bound, and this has " + ticked(given[0]) + " and " + ticked(given[1]));
        if (!stress_known) return;
        const Item& item = *at.at(given[0]);
        const std::string field = "rule." + given[0];
        const bool reference = at.contains("rating") || at.contains("requirement");
        const Unit unit = info(rule.stress).unit;
        std::optional<double> value;
        if (given[0] == "below") {
            rule.bound = BoundKind::below;
            if (!at.contains("rating")) return fault(item, field, "`below` is a distance below a rating, and this rule names none", "rating = \"T_jmax\"");
            value = quantity(item, field, unit == Unit::celsius ? Unit::kelvin : unit);
            if (value && !(*value >= 0)) fault(item, field, "`below` cannot be negative");
        } else if (reference) {
            rule.bound = given[0] == "at_most" ? BoundKind::fraction : BoundKind::at_least;
            value = quantity(item, field, Unit::fraction);
            const double most = rule.bound == BoundKind::fraction ? 2 : 100;
            if (value && (!(*value > 0) || !(*value <= most)))
                fault(item, field, ticked(given[0]) + " is " + format_quantity(*value, Unit::fraction) + " of the rating: no sensible share", "a share such as 0.80");
        } else {
            rule.bound = given[0] == "at_most" ? BoundKind::absolute : BoundKind::at_least;
            value = quantity(item, field, unit);
        }
        if (value) rule.value = *value;
    }

    bool whole_;
    std::vector<Fault>& faults_;
    Rulebook book_;
    std::map<std::string, int> seen_;
    std::set<std::string> misspelt_;
};

}  // namespace

Rulebook read_rulebook(std::string_view text, const std::string& file) {
    std::vector<Fault> faults;
    const ItemText items = read_items(text, file, faults);
    Rulebook book = Reader(file, items.whole, faults).run(items.root);
    if (!faults.empty()) {
        std::stable_sort(faults.begin(), faults.end(), [](const Fault& a, const Fault& b) {
            return std::tuple(a.place.line, a.place.column) < std::tuple(b.place.line, b.place.column);
        });
        throw InputError(std::move(faults));
    }
    return book;
}

}  // namespace binwright
