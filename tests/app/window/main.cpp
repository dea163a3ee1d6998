// SPDX-License-Identifier: GPL-3.0-or-later
#define CATCH_CONFIG_EXTERNAL_INTERFACES
#include <QTimer>
#include <catch2/catch.hpp>

#include "tests/app/window/support.hpp"

namespace {

int argument_count = 1;
char program_name[] = "test_window";
char* arguments[] = {program_name, nullptr};
std::unique_ptr<QApplication> application;

struct QtListener : Catch::TestEventListenerBase {
    using TestEventListenerBase::TestEventListenerBase;
    void testRunStarting(const Catch::TestRunInfo&) override { application = std::make_unique<QApplication>(argument_count, arguments); }
    void testRunEnded(const Catch::TestRunStats&) override { application.reset(); }
};
CATCH_REGISTER_LISTENER(QtListener)

}  // namespace

namespace binwright {

void on_dialog(const QString& name, std::function<void(QDialog&)> act) {
    auto* timer = new QTimer(qApp);
    timer->setInterval(20);
    QObject::connect(timer, &QTimer::timeout, qApp, [timer, name, act] {
        auto* dialog = qobject_cast<QDialog*>(QApplication::activeModalWidget());
        if (dialog == nullptr || dialog->objectName() != name) return;
        timer->stop();
        timer->deleteLater();
        act(*dialog);
    });
    timer->start();
}

}  // namespace binwright
