// SPDX-License-Identifier: GPL-3.0-or-later
// The real window without a screen: widgets by their names, questions answered or failed, waiting for the judge.
#pragma once
#include <QApplication>
#include <QComboBox>
#include <QDialog>
#include <QLabel>
#include <QLineEdit>
#include <QPushButton>
#include <QTableView>
#include <QTest>
#include <QTemporaryDir>
#include <QTextBrowser>
#include <catch2/catch.hpp>
#include <deque>
#include <fstream>
#include <functional>
#include <sstream>

#include "app/window/main_window.hpp"

namespace binwright {

/// Answers only what a test has announced; anything else fails the test.
class Answers : public Ask {
  public:
    std::deque<Unsaved> unsaved_answers;
    std::deque<QString> files, saves;
    std::deque<bool> sures;
    QStringList told;
    bool tell_expected = false;

    Unsaved unsaved(QWidget*, const QString& name) override {
        INFO("asked about unsaved changes of " << name.toStdString());
        CHECK_FALSE(unsaved_answers.empty());
        return unsaved_answers.empty() ? Unsaved::stay : take(unsaved_answers);
    }
    std::optional<QString> open_file(QWidget*) override { return given(files, "which file to open"); }
    std::optional<QString> save_file(QWidget*, const QString&) override { return given(saves, "where to save"); }
    bool sure(QWidget*, const QString& question) override {
        INFO("asked: " << question.toStdString());
        CHECK_FALSE(sures.empty());
        return !sures.empty() && take(sures);
    }
    void tell(QWidget*, const QString& title, const QString& text) override {
        INFO("told: " << title.toStdString() << ": " << text.toStdString());
        CHECK(tell_expected);
        told << title + ": " + text;
    }

  private:
    template <class T>
    static T take(std::deque<T>& from) {
        T value = from.front();
        from.pop_front();
        return value;
    }
    static std::optional<QString> given(std::deque<QString>& from, const char* what) {
        INFO("asked " << what);
        CHECK_FALSE(from.empty());
        if (from.empty()) return std::nullopt;
        return take(from);
    }
};

inline std::string slurp(const std::string& path) {
    std::ifstream in(path, std::ios::binary);
    std::ostringstream text;
    text << in.rdbuf();
    return text.str();
}

template <class Widget>
Widget* named(QWidget& in, const char* name) {
    Widget* found = in.findChild<Widget*>(name);
    INFO("a widget named " << name);
    REQUIRE(found != nullptr);
    return found;
}

/// The window on a copy of the demo, in memory bin.
struct DemoWindow {
    QTemporaryDir folder;
    std::string path;
    Answers answers;
    std::unique_ptr<MainWindow> window;

    explicit DemoWindow(const char* demo = "tide-gauge.toml") {
        path = folder.filePath("demo.toml").toStdString();
        std::ofstream(path) << slurp(std::string(BINWRIGHT_SOURCE) + "/app/demo/" + demo);
        window = std::make_unique<MainWindow>(WindowStart{path, "", true}, answers, false);
        window->resize(1280, 800);
        window->show();
    }
    void settle() { REQUIRE(QTest::qWaitFor([this] { return !window->busy(); }, 120000)); }
    void enter(const char* field, const QString& text) {
        auto* edit = named<QLineEdit>(*window, field);
        edit->setFocus();
        edit->selectAll();
        QTest::keyClicks(edit, text);
        QTest::keyClick(edit, Qt::Key_Return);
    }
    [[nodiscard]] const Candidate* candidate(const std::string& label) {
        auto* model = named<SeatSheet>(*window, "seat_sheet")->model();
        for (int row = 0; row < model->rowCount(); ++row)
            if (const Candidate* one = model->candidate(model->index(row, 0)); one->lot.label == label) return one;
        return nullptr;
    }
};

/// Lets dialogs that the window runs be answered: `act` gets the open form once it is there.
void on_dialog(const QString& name, std::function<void(QDialog&)> act);

}  // namespace binwright
