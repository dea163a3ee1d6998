// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/judge.hpp"

#include <QMetaObject>
#include <cmath>

namespace binwright {

std::vector<IntervalView> intervals_at(const Setup& setup, const At& at) {
    const Circuit circuit = circuit_of(setup, End::typical, Allowances{}, at);
    const OperatingPoint point = point_of(setup, at);
    const SteadyState state = solve(circuit, point);
    const Waveforms waves = waveforms(circuit, point, 200);
    std::vector<IntervalView> views;
    const double period = 1 / point.frequency;
    double from = 0;
    for (const Interval& interval : state.intervals) {
        IntervalView view{interval.duration / period, interval.switch_on, interval.rectifier_on, {}};
        const double to = from + interval.duration, slack = 1e-9 * period;
        for (std::size_t c = 1; c < waves.names.size(); ++c) {
            const std::string& name = waves.names[c];
            if (!name.ends_with(".current")) continue;
            double sum = 0;
            for (std::size_t k = 0; k + 1 < waves.columns[0].size(); ++k) {
                const double a = waves.columns[0][k], b = waves.columns[0][k + 1];
                if (a < from - slack || b > to + slack) continue;
                sum += 0.5 * (b - a) * (waves.columns[c][k] + waves.columns[c][k + 1]);
            }
            view.current[name.substr(0, name.size() - 8)] = interval.duration > 0 ? sum / interval.duration : 0;
        }
        from = to;
        if (view.share > 1e-6) views.push_back(std::move(view));
    }
    return views;
}

Judge::Judge(QObject* parent) : QObject(parent) {}

Judge::~Judge() {
    cancel();
    sweep(true);
}

void Judge::leave(Line& line) {
    if (line.stop) line.stop->store(true);
    if (line.thread.joinable()) leaving_.push_back(std::move(line));
    line = {};
    sweep(false);
}

void Judge::sweep(bool wait) {
    std::erase_if(leaving_, [wait](Line& line) {
        if (!wait && !line.done->load()) return false;
        line.thread.join();
        return true;
    });
}

void Judge::settle() {
    if (!busy()) emit idle();
}

void Judge::check(Setup setup, Rulebook book) {
    leave(check_);
    auto stop = std::make_shared<std::atomic<bool>>(false), done = std::make_shared<std::atomic<bool>>(false);
    check_.stop = stop;
    check_.done = done;
    ++checking_;
    check_.thread = std::thread([this, stop, done, setup = std::move(setup), book = std::move(book)]() mutable {
        auto judgement = std::make_shared<Judgement>();
        QString trouble;
        try {
            judgement->report = binwright::check(setup, book, [stop](double) { return !stop->load(); });
            judgement->drawn_at = typical_point(setup.converter);
            judgement->setup = std::move(setup);
            try {
                judgement->intervals = intervals_at(judgement->setup, judgement->drawn_at);
            } catch (const std::exception&) {  // the drawings are an extra: the verdicts stand without them
            }
        } catch (const Stopped&) {
        } catch (const std::exception& error) {
            trouble = QString::fromUtf8(error.what());
        }
        QMetaObject::invokeMethod(
            this,
            [this, stop, judgement, trouble] {
                --checking_;
                if (!stop->load()) {
                    if (trouble.isEmpty()) emit checked(judgement);
                    else emit failed(trouble);
                }
                settle();
            },
            Qt::QueuedConnection);
        done->store(true);
    });
}

void Judge::rank(Setup setup, Seat seat, std::vector<Lot> lots, Rulebook book, Prefer prefer) {
    leave(rank_);
    auto stop = std::make_shared<std::atomic<bool>>(false), done = std::make_shared<std::atomic<bool>>(false);
    rank_.stop = stop;
    rank_.done = done;
    ++ranking_;
    rank_.thread = std::thread([this, stop, done, setup = std::move(setup), seat, lots = std::move(lots), book = std::move(book), prefer] {
        auto ranking = std::make_shared<Ranking>();
        QString trouble;
        ranking->seat = seat;
        auto last = std::make_shared<std::atomic<int>>(-1);
        try {
            ranking->candidates = binwright::rank(setup, seat, lots, book, prefer, [this, stop, last](double share) {
                const int percent = static_cast<int>(100 * share);
                if (last->exchange(percent) != percent && !stop->load())
                    QMetaObject::invokeMethod(
                        this,
                        [this, stop, share] {
                            if (!stop->load()) emit progressed(share);
                        },
                        Qt::QueuedConnection);
                return !stop->load();
            });
        } catch (const Stopped&) {
        } catch (const std::exception& error) {
            trouble = QString::fromUtf8(error.what());
        }
        QMetaObject::invokeMethod(
            this,
            [this, stop, ranking, trouble] {
                --ranking_;
                if (!stop->load()) {
                    if (trouble.isEmpty()) emit ranked(ranking);
                    else emit rank_failed(trouble);
                }
                settle();
            },
            Qt::QueuedConnection);
        done->store(true);
    });
}

void Judge::cancel() {
    leave(check_);
    leave(rank_);
}

void Judge::cancel_rank() { leave(rank_); }

}  // namespace binwright
