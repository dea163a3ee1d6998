// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/network/scene.hpp"

#include <Eigen/Eigenvalues>
#include <unsupported/Eigen/MatrixFunctions>

#include <algorithm>
#include <array>
#include <boost/math/tools/toms748_solve.hpp>
#include <cmath>
#include <functional>
#include <map>
#include <numbers>

#include "engine/network/equations.hpp"

namespace binwright {
namespace {

constexpr int kMost = kMostStates + 1;
using Flow = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, kMost, kMost>;
using Vector = Eigen::Matrix<double, Eigen::Dynamic, 1, 0, kMost, 1>;

constexpr int kPerPeriod = 64;        ///< steps in a period of the fastest mode that rings
constexpr int kMostSteps = 200000;
constexpr double kRested = 0.02;      ///< share of the first swing below which nothing new can come
constexpr double kSlowPeriods = 40;   ///< of the slowest mode, where hardly anything damps it
constexpr double kBodyDiode = 0.7;    ///< [V]

/// One linear stretch of the scene: rectifier on or off, each choke saturated or not.
struct Stretch {
    Flow G;                ///< of [x, 1]
    OutputMatrix C;
    Eigen::Matrix<double, Eigen::Dynamic, 1, 0, kMostOutputs, 1> d;
    StateMatrix P;
    int states = 0;
};

using Watch = std::function<void(double time, double step, const Vector& from, const Vector& to, const Stretch& stretch)>;

class Scene {
  public:
    Scene(const Circuit& circuit, const HotConnection& connection) : circuit_(circuit), connection_(connection) {
        if (circuit.source != SourceKind::impedance) throw OutsideModel("a hot connection needs a source with resistance or inductance");
        if (!(connection.input_voltage > 0)) throw OutsideModel("the input voltage of a hot connection must be above 0");
        stretch(key(false));
        find_pace();
    }

    /// Runs from the first moment until everything has died down, and shows every step.
    double run(const Watch& watch) {
        bool on = false;
        const int n = stretch(key(on)).states;
        Vector z = Vector::Zero(n + 1);
        z[n] = 1;
        double t = 0, step = first_step_;
        int since = 0;
        for (int count = 0; t < duration_; ++count) {
            if (count >= kMostSteps) throw OutsideModel("the hot connection rings on for too long to be followed");
            const Stretch& now = stretch(key(on));
            step = std::min(step, duration_ - t);
            Vector next = flow(key(on), step) * z;
            double taken = step;
            const std::vector<Event> events = events_between(now, on, z, next);
            if (!events.empty()) {
                Event first = events.front();
                taken = HUGE_VAL;
                for (const Event& event : events) {
                    const double at = instant(now, event, z, step);
                    if (at < taken) taken = at, first = event;
                }
                next = Flow((now.G * taken).exp()) * z;
                if (watch) watch(t, taken, z, next, now);
                if (first.of == kRectifier) on = !on;
                else saturated_[first.of] = !saturated_[first.of];
                const Stretch& then = stretch(key(on));
                next.head(n) = (then.P * next.head(n)).eval();
                since = 0;
                step = std::min(step, first_step_ * 64);
            } else {
                if (watch) watch(t, taken, z, next, now);
                if (++since % kPerPeriod == 0) step = std::min(2 * step, longest_step_);
            }
            if (saturated_[0] || saturated_[1]) ever_saturated_ = true;
            z = next;
            t += taken;
        }
        return t;
    }

    [[nodiscard]] bool ever_saturated() const { return ever_saturated_; }
    [[nodiscard]] double duration() const { return duration_; }

  private:
    static constexpr int kRectifier = 2;
    struct Event {
        int of;       ///< 0, 1: a choke's saturation; kRectifier
        double sign;  ///< of the watched value now
    };
    const Circuit& circuit_;
    const HotConnection& connection_;
    std::map<int, Stretch> stretches_;
    std::map<std::pair<int, double>, Flow> flows_;
    std::array<bool, 2> saturated_{false, false};
    bool ever_saturated_ = false;
    double first_step_ = 0, longest_step_ = 0, duration_ = 0;

    [[nodiscard]] int key(bool on) const { return (on ? 1 : 0) + (saturated_[0] ? 2 : 0) + (saturated_[1] ? 4 : 0); }

    const Stretch& stretch(int key) {
        const auto known = stretches_.find(key);
        if (known != stretches_.end()) return known->second;
        Circuit circuit = circuit_;
        if (key & 2) circuit.primary.inductance *= 1 - connection_.primary->drop;
        if (key & 4) circuit.secondary.inductance *= 1 - connection_.secondary->drop;
        StateEquations equations;
        derive(circuit, 0, equations);
        const Configuration& from = equations.configuration[configuration_index(false, key & 1)];
        Stretch out;
        const int n = out.states = equations.states;
        Eigen::Matrix<double, kInputs, 1> inputs = Eigen::Matrix<double, kInputs, 1>::Zero();
        inputs[Input::emf] = connection_.input_voltage;
        inputs[Input::rectifier_threshold] = circuit_.rectifier_drop;
        out.G = Flow::Zero(n + 1, n + 1);
        out.G.topLeftCorner(n, n) = from.A;
        out.G.topRightCorner(n, 1) = from.B * inputs;
        out.C = from.C;
        out.d = from.D * inputs;
        out.P = from.P;
        return stretches_.emplace(key, std::move(out)).first->second;
    }

    const Flow& flow(int key, double step) {
        const auto known = flows_.find({key, step});
        if (known != flows_.end()) return known->second;
        if (flows_.size() > 400) flows_.clear();
        return flows_.emplace(std::pair(key, step), Flow((stretch(key).G * step).exp())).first->second;
    }

    /// Steps and duration from the modes of the network with the rectifier open and conducting.
    void find_pace() {
        double fastest = 0, ringing = 0, slowest = HUGE_VAL, damping = HUGE_VAL;
        for (const int one : {0, 1}) {
            const Stretch& of = stretch(one);
            const Eigen::MatrixXd A = of.G.topLeftCorner(of.states, of.states);
            const auto values = Eigen::EigenSolver<Eigen::MatrixXd>(A, false).eigenvalues();
            const double largest = values.cwiseAbs().maxCoeff();
            for (const auto& value : values) {
                const double size = std::abs(value), turns = std::abs(value.imag()), decay = -value.real();
                if (!(size > 1e-9 * largest)) continue;  // a charge that nothing moves
                fastest = std::max(fastest, size);
                if (turns > 0.05 * size) {
                    ringing = std::max(ringing, size);
                    slowest = std::min(slowest, turns);
                }
                if (decay > 1e-9 * size) damping = std::min(damping, decay);
            }
        }
        if (!(fastest > 0)) throw OutsideModel("nothing moves when the input is connected");
        const double period = std::isfinite(slowest) ? 2 * std::numbers::pi / slowest : 0;
        const double rest = std::isfinite(damping) ? std::log(1 / kRested) / damping : HUGE_VAL;
        duration_ = period > 0 ? std::clamp(rest, 2 * period, kSlowPeriods * period) : rest;
        if (!std::isfinite(duration_)) throw OutsideModel("nothing damps the hot connection");
        first_step_ = 1 / (20 * fastest);
        longest_step_ = ringing > 0 ? 2 * std::numbers::pi / ringing / kPerPeriod : duration_ / 1000;
        first_step_ = std::min(first_step_, longest_step_);
    }

    /// What is watched: below zero, something happens.
    double watched(const Stretch& now, const Event& event, const Vector& z) const {
        const auto read = [&](int output) { return now.C.row(output).dot(z.head(now.states)) + now.d[output]; };
        if (event.of == kRectifier)
            return event.sign > 0 ? read(Output::rectifier_current) : circuit_.rectifier_drop - read(Output::rectifier_voltage);
        const int output = event.of == 0 ? Output::primary_current : Output::secondary_current;
        const double limit = event.of == 0 ? connection_.primary->current : connection_.secondary->current;
        return event.sign * (limit - std::abs(read(output)));
    }

    std::vector<Event> events_between(const Stretch& now, bool on, const Vector& from, const Vector& to) const {
        std::vector<Event> all, found;
        all.push_back({kRectifier, on ? 1.0 : -1.0});
        if (connection_.primary) all.push_back({0, saturated_[0] ? -1.0 : 1.0});
        if (connection_.secondary && has_secondary(*circuit_.topology)) all.push_back({1, saturated_[1] ? -1.0 : 1.0});
        for (const Event& event : all) {
            const double scale = event.of == kRectifier && !on ? connection_.input_voltage : 1e-3 * connection_.input_voltage;
            const double before = watched(now, event, from), after = watched(now, event, to);
            if (after < -1e-10 * scale && (before > -1e-9 * scale || after < before)) found.push_back(event);
        }
        return found;
    }

    double instant(const Stretch& now, const Event& event, const Vector& z, double step) const {
        const auto value = [&](double s) { return watched(now, event, s > 0 ? Vector(Flow((now.G * s).exp()) * z) : z); };
        const double at_start = value(0);
        if (!(at_start > 0)) {
            // It has only just happened the other way round (its value is zero): look for the next zero after the first rise.
            double low = 0;
            for (double s = step / 1024; s < step; s *= 2)
                if (value(s) > 0) low = s;
            if (low == 0) return 0;
            std::uintmax_t most = 60;
            const auto bracket = boost::math::tools::toms748_solve(value, low, step, boost::math::tools::eps_tolerance<double>(48), most);
            return bracket.second;
        }
        std::uintmax_t most = 60;
        const auto bracket = boost::math::tools::toms748_solve(value, 0.0, step, at_start, value(step), boost::math::tools::eps_tolerance<double>(48), most);
        return bracket.second;
    }
};

/// Extremes of the cubic that meets both ends in value and slope (fourth order in the step).
void widen(Extreme& extreme, double y0, double s0, double y1, double s1, double step) {
    const auto take = [&](double y) {
        extreme.highest = std::max(extreme.highest, y);
        extreme.lowest = std::min(extreme.lowest, y);
    };
    take(y0);
    take(y1);
    if (!(s0 * s1 < 0)) return;
    const double a = 2 * (y0 - y1) + step * (s0 + s1), b = 3 * (y1 - y0) - step * (2 * s0 + s1), c = step * s0;
    const double root = b * b - 3 * a * c;
    if (root < 0) return;
    for (const double sign : {-1.0, 1.0}) {
        const double u = std::abs(a) > 1e-300 ? (-b + sign * std::sqrt(root)) / (3 * a) : -c / (2 * b);
        if (u > 0 && u < 1) take(((a * u + b) * u + c) * u + y0);
    }
}

}  // namespace

ConnectionPeaks connect_hot(const Circuit& circuit, const HotConnection& connection) {
    ConnectionPeaks peaks;
    Extreme source, rectifier, primary, secondary, reverse;
    const std::pair<int, Extreme*> watched[] = {
        {Output::input_voltage, &peaks.input},         {Output::coupling_voltage, &peaks.coupling},   {Output::output_voltage, &peaks.output},
        {Output::switch_voltage, &peaks.switch_voltage}, {Output::rectifier_voltage, &reverse},       {Output::source_current, &source},
        {Output::rectifier_current, &rectifier},       {Output::primary_current, &primary},           {Output::secondary_current, &secondary}};
    Scene scene(circuit, connection);
    peaks.duration = scene.run([&](double, double step, const Vector& from, const Vector& to, const Stretch& now) {
        const Vector slope_from = now.G * from, slope_to = now.G * to;
        const int n = now.states;
        for (const auto& [output, extreme] : watched) {
            const auto row = now.C.row(output);
            widen(*extreme, row.dot(from.head(n)) + now.d[output], row.dot(slope_from.head(n)), row.dot(to.head(n)) + now.d[output], row.dot(slope_to.head(n)), step);
        }
        // Simpson over the step, its middle by the same cubic.
        const auto row = now.C.row(Output::source_current);
        const double d = now.d[Output::source_current];
        const double i0 = row.dot(from.head(n)) + d, i1 = row.dot(to.head(n)) + d;
        const double middle = 0.5 * (i0 + i1) + step / 8 * (row.dot(slope_from.head(n)) - row.dot(slope_to.head(n)));
        peaks.source_charge_squared += step / 6 * (i0 * i0 + 4 * middle * middle + i1 * i1);
        peaks.source_energy += connection.input_voltage * step / 6 * (i0 + 4 * middle + i1);
    });
    peaks.saturated = scene.ever_saturated();
    peaks.reverse_voltage = -reverse.lowest;
    const auto largest = [](const Extreme& one) { return std::max(one.highest, -one.lowest); };
    peaks.source_current = largest(source);
    peaks.rectifier_current = largest(rectifier);
    peaks.primary_current = largest(primary);
    peaks.secondary_current = largest(secondary);
    peaks.body_diode = peaks.switch_voltage.lowest < -kBodyDiode;
    return peaks;
}

Waveforms connection_waveforms(const Circuit& circuit, const HotConnection& connection, int samples) {
    const std::pair<const char*, int> rows[] = {{"source.current", Output::source_current},     {"input_capacitor.voltage", Output::input_voltage},
                                                {"switch.voltage", Output::switch_voltage},     {"primary.current", Output::primary_current},
                                                {"coupling_capacitor.voltage", Output::coupling_voltage}, {"secondary.current", Output::secondary_current},
                                                {"rectifier.current", Output::rectifier_current}, {"rectifier.voltage", Output::rectifier_voltage},
                                                {"output_capacitor.voltage", Output::output_voltage}};
    Waveforms out;
    out.names.emplace_back("time");
    out.columns.emplace_back();
    const Topology& topology = *circuit.topology;
    std::vector<int> outputs;
    for (const auto& [name, output] : rows) {
        if (output == Output::coupling_voltage && !has_seat(topology, Seat::coupling_capacitor)) continue;
        if (output == Output::secondary_current && !has_secondary(topology)) continue;
        out.names.emplace_back(name);
        out.columns.emplace_back();
        outputs.push_back(output);
    }
    Scene scene(circuit, connection);
    const double each = scene.duration() / std::max(1, samples - 1);
    double due = 0;
    scene.run([&](double time, double step, const Vector& from, const Vector& to, const Stretch& now) {
        for (; due <= time + step * (1 + 1e-9) && static_cast<int>(out.columns[0].size()) < samples; due += each) {
            const double s = due - time;
            const Vector z = s >= step ? to : Vector(Flow((now.G * std::max(0.0, s)).exp()) * from);
            out.columns[0].push_back(due);
            for (std::size_t k = 0; k < outputs.size(); ++k)
                out.columns[k + 1].push_back(now.C.row(outputs[k]).dot(z.head(now.states)) + now.d[outputs[k]]);
        }
    });
    return out;
}

}  // namespace binwright
