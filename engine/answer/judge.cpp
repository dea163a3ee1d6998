// SPDX-License-Identifier: GPL-3.0-or-later
// What is fitted, exposed at both ends of all spreads and judged; nothing is decided in here that judge_part does not.
#include <chrono>
#include <cmath>
#include <map>
#include <memory>

#include "engine/answer/beside.hpp"
#include "engine/answer/judge_setup.hpp"
#include "engine/answer/models.hpp"
#include "engine/answer/sight.hpp"
#include "engine/answer/surroundings.hpp"

namespace binwright {
namespace {

std::string today() {
    const std::chrono::year_month_day date{std::chrono::floor<std::chrono::days>(std::chrono::system_clock::now())};
    const auto two = [](unsigned n) { return (n < 10 ? "0" : "") + std::to_string(n); };
    return std::to_string(static_cast<int>(date.year())) + "-" + two(static_cast<unsigned>(date.month())) + "-" + two(static_cast<unsigned>(date.day()));
}

PartExposure of(const Exposure& exposure, Seat seat, std::size_t entry) {
    const PartExposure* found = find_exposure(exposure, seat, entry);
    return found ? *found : PartExposure{};
}

/// The setup with one figure of one fitted kind exactly known.
Setup with_figure(const Setup& setup, Seat seat, std::size_t entry, Symbol symbol, double value) {
    std::vector<Fitted> fitted = setup.fitted.at(seat);
    Lot& lot = fitted[entry].lot;
    Figure figure;
    figure.symbol = symbol;
    figure.at = info(symbol).usual;
    for (const Figure& one : lot.part.figures)
        if (one.symbol == symbol) figure = one;
    figure.value = {value, value, value};
    figure.known = Known::measured;
    std::erase_if(lot.part.figures, [&](const Figure& one) { return one.symbol == symbol; });
    lot.part.figures.push_back(figure);
    return with_fitted(setup, seat, std::move(fitted));
}

/// At one point alone: both ends of the tolerance of inductance, the worse of each stress.
PartExposure at_point(const Setup& setup, const Allowances& allowances, Seat seat, std::size_t entry, const At& at) {
    const auto& winding = setup.converter.winding;
    const double first = winding.primary ? winding.primary->tolerance.value_or(0) : 0;
    const double second = winding.secondary ? winding.secondary->tolerance.value_or(0) : first;
    Bench bench = bench_of(setup, End::worst, allowances);
    const Sight sight = sight_of(bench);
    PartExposure out;
    for (const double sign : {-1.0, 1.0}) {
        bench.primary_factor = 1 + sign * first;
        bench.secondary_factor = 1 + sign * second;
        Solver solver;
        const Operated operated = operate(bench, at, solver);
        for (const StressKey& key : sight.keys) {
            if (key.seat != seat || key.entry != entry) continue;
            StressValue value = explain(bench, key, at, operated);
            StressValue* earlier = nullptr;
            for (StressValue& one : out.stresses)
                if (one.stress == key.stress) earlier = &one;
            if (earlier == nullptr) out.stresses.push_back(std::move(value));
            else if (std::isnan(value.value) || (key.lowest_is_worst() ? value.value < earlier->value : value.value > earlier->value)) *earlier = std::move(value);
        }
    }
    for (const Sight::Missing& one : sight.missing)
        if (one.seat == seat && one.entry == entry) out.missing.emplace_back(one.stress, one.figure);
    return out;
}

std::optional<PartExposure> see(const Setup& setup, const Rulebook& book, Seat seat, std::size_t entry, const At* only) {
    try {
        if (only) return at_point(setup, book.allowances, seat, entry, *only);
        return of(expose(setup, End::worst, book.allowances), seat, entry);
    } catch (const OutsideModel&) {
        return std::nullopt;
    }
}

SinkShare sink_of(const Converter& converter, const std::string& name, const Exposure& exposure) {
    SinkShare sink;
    sink.name = name;
    sink.resistance = converter.heatsinks.at(name);
    for (const Loss& loss : exposure.losses)
        if (loss.seat && converter.seat(*loss.seat).heatsink == name) sink.power += loss.power;
    return sink;
}

}  // namespace

bool differs_between_ends(const Setup& setup) {
    for (const auto& [seat, fitted] : setup.fitted)
        for (const Fitted& entry : fitted) {
            if (ages_unmeasured(entry.lot)) return true;
            for (const Figure& figure : entry.lot.part.figures)
                if (!figure.value.exact()) return true;
        }
    return false;
}

BothEnds expose_both(const Setup& setup, const Allowances& allowances, const Progress& progress) {
    const auto part = [&](double from) -> Progress {
        if (!progress) return {};
        return [&progress, from](double done) { return progress(from + 0.5 * done); };
    };
    BothEnds ends;
    ends.worst = expose(setup, End::worst, allowances, part(0));
    ends.best = expose(setup, End::best, allowances, part(0.5));
    return ends;
}

std::vector<SeatReport> judge_setup(const Setup& setup, const BothEnds& ends, const Rulebook& book, const std::vector<Seat>& seats, bool search,
                                    const Progress& progress) {
    std::vector<SeatReport> out;
    const Converter& converter = setup.converter;
    for (const Seat seat : seats) {
        if (!has_seat(*converter.topology, seat)) continue;
        const SeatConfig& config = converter.seat(seat);
        const auto fitted = setup.fitted.find(seat);
        if (fitted == setup.fitted.end() || fitted->second.empty()) {
            out.push_back(judge_empty(seat, converter.reference(seat), config.element.has_value(), book.name));
            continue;
        }
        for (std::size_t entry = 0; entry < fitted->second.size(); ++entry) {
            JudgedPart part;
            part.seat = seat;
            part.reference = converter.reference(seat);
            part.lot = fitted->second[entry].lot;
            part.count = fitted->second[entry].count;
            part.best = of(ends.best, seat, entry);
            part.worst = of(ends.worst, seat, entry);
            for (StressValue& value : surroundings(setup, ends.best, seat)) part.best.stresses.push_back(std::move(value));
            for (StressValue& value : surroundings(setup, ends.worst, seat)) part.worst.stresses.push_back(std::move(value));
            part.shares_air = converter.enclosure.has_value();
            part.runaway_best = ends.best.runaway;
            part.runaway_worst = ends.worst.runaway;
            part.lowest_ambient = converter.operating.ambient.lowest;
            part.highest_ambient = converter.operating.ambient.highest;
            for (const OperatingInfo& one : kOperating) part.top.set(one.quantity, converter.operating.get(one.quantity).highest);
            part.life_required = converter.operating.life;
            part.ripple_allowed = converter.operating.output_ripple;
            if (converter.drive.voltage) {
                part.drive_lowest = converter.drive.voltage->lowest;
                part.drive_highest = converter.drive.voltage->highest;
            }
            part.today = today();
            if (!config.heatsink.empty() && converter.heatsinks.contains(config.heatsink)) part.sink = sink_of(converter, config.heatsink, ends.worst);
            if (search) {
                const auto step = [&progress] { if (progress && !progress(1)) throw Stopped(); };
                const auto seen = std::make_shared<std::map<std::pair<Symbol, double>, PartExposure>>();
                part.probe = [&setup, &book, seat, entry, seen, step](Symbol symbol, double value, const At* only) -> std::optional<PartExposure> {
                    step();
                    const auto known = seen->find({symbol, value});
                    if (!only && known != seen->end()) return known->second;
                    const Setup with = with_figure(setup, seat, entry, symbol, value);
                    const auto found = see(with, book, seat, entry, only);
                    if (!only && found) seen->emplace(std::pair(symbol, value), *found);
                    return found;
                };
                if (part.sink)
                    part.sink_probe = [&setup, &book, seat, entry, step, name = part.sink->name](double resistance, const At* only) -> std::optional<PartExposure> {
                        step();
                        Setup with = setup;
                        with.converter.heatsinks[name] = resistance;
                        return see(with, book, seat, entry, only);
                    };
            }
            out.push_back(judge_part(part, book));
        }
    }
    return out;
}

std::vector<SeatReport> judge_beside(const Setup& setup, const BothEnds& ends, const Rulebook& book) {
    std::vector<SeatReport> out;
    const std::vector<Beside> all = beside_of(setup.converter);
    for (std::size_t k = 0; k < all.size(); ++k) {
        JudgedPart part;
        part.reference = all[k].name;
        part.lot.part = all[k].part;
        part.best = ends.best.beside[k];
        part.worst = ends.worst.beside[k];
        part.lowest_ambient = setup.converter.operating.ambient.lowest;
        part.highest_ambient = setup.converter.operating.ambient.highest;
        part.voltages_only = all[k].what == Beside::What::across;
        out.push_back(judge_part(part, book));
        if (!part.voltages_only) continue;
        out.back().part.clear();  // its name is said already
        for (Finding& finding : out.back().findings) finding.part.clear();
    }
    return out;
}

CheckReport check(const Setup& setup, const Rulebook& book, const Progress& progress) {
    CheckReport report;
    const Progress first = progress ? Progress([&progress](double done) { return progress(0.9 * done); }) : Progress();
    BothEnds ends = expose_both(setup, book.allowances, first);
    report.seats = judge_setup(setup, ends, book, {std::begin(kSeats), std::end(kSeats)}, true, progress);
    report.beside = judge_beside(setup, ends, book);
    report.converter = judge_converter(ends.best.converter, ends.worst.converter, book);
    report.exposure = std::move(ends.worst);
    report.verdict = Verdict::holds;
    for (const SeatReport& seat : report.seats) report.verdict = graver(report.verdict, seat.verdict);
    for (const SeatReport& one : report.beside) report.verdict = graver(report.verdict, one.verdict);
    for (const Finding& finding : report.converter) report.verdict = graver(report.verdict, finding.verdict);
    return report;
}

}  // namespace binwright
