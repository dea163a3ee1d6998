// SPDX-License-Identifier: GPL-3.0-or-later
// app/run and tests/run, with stand-ins for the package manager and the build: what they call, and what they pass on.
#include <catch2/catch.hpp>
#include <filesystem>

#include "tests/app/command/program.hpp"

using namespace binwright::testing;

namespace {

namespace fs = std::filesystem;

struct Checkout : Folder {
    Checkout() {
        for (const char* name : {"app/run", "app/packages.sh", "tests/run"}) script(std::string("a check out/") + name, source_file(name));
        script("tools/cmake",
               "#!/bin/sh\necho \"cmake $*\" >>\"$CALLS\"\nwhile [ $# -gt 0 ]; do case $1 in -B) b=$2 ;; -S) s=$2 ;; -D*) o=\"$o${1#-D}\n\" ;; esac; shift; done\n"
               "mkdir -p \"$b/app\"; : >\"$b/build.ninja\"\n"
               "printf 'CMAKE_HOME_DIRECTORY:INTERNAL=%s\\n%s' \"$s\" \"$o\" | sed 's/^\\(BINWRIGHT_[A-Z]*\\|CMAKE_BUILD_TYPE\\)=/\\1:BOOL=/' >\"$b/CMakeCache.txt\"\n");
        script("tools/ninja",
               "#!/bin/sh\necho \"ninja $*\" >>\"$CALLS\"\n"
               "printf '#!/bin/sh\\necho \"in $(pwd)\"\\nfor a in \"$@\"; do echo \"[$a]\"; done\\nexit 3\\n' >\"$2/app/binwright\"; chmod +x \"$2/app/binwright\"\n"
               "exit ${NINJA_STATUS-0}\n");
        script("tools/ctest", "#!/bin/sh\necho \"ctest $*\" >>\"$CALLS\"\n");
        script("tools/dpkg-query", "#!/bin/sh\nfor last; do :; done\ncase \" $MISSING \" in *\" $last \"*) exit 1 ;; esac\nprintf 'ii '\n");
        script("tools/apt-get", "#!/bin/sh\necho \"apt-get $*\" >>\"$CALLS\"\n");
        script("tools/sudo", "#!/bin/sh\necho sudo >>\"$CALLS\"\nexec \"$@\"\n");
        script("tools/id", "#!/bin/sh\necho ${USER_NUMBER-0}\n");
        environment["PATH"] = path("tools").string() + ":/usr/bin:/bin";
        environment["CALLS"] = path("calls").string();
        fs::create_directories(path("elsewhere"));
    }
    void script(const std::string& name, const std::string& text) const {
        write(name, text);
        fs::permissions(path(name), fs::perms::owner_all);
    }
    Answer app_run(const std::string& arguments = {}) const { return start({"/bin/sh", "-c", "cd elsewhere && '../a check out/app/run' " + arguments}); }
    Answer tests_run(const std::string& arguments = {}) const { return start({"/bin/sh", "-c", "cd elsewhere && '../a check out/tests/run' " + arguments}); }
    std::string calls() const { return fs::exists(path("calls")) ? read("calls") : ""; }
};

std::size_t count(const std::string& text, const std::string& what) {
    std::size_t n = 0;
    for (std::size_t at = text.find(what); at != std::string::npos; at = text.find(what, at + 1)) ++n;
    return n;
}

}  // namespace

TEST_CASE("app/run passes arguments, folder and exit status through, from a path with spaces", "[app][scripts]") {
    const Checkout checkout;
    const Answer answer = checkout.app_run("check 'my file.toml' --with 'a=b c'");
    INFO(answer.err);
    CHECK(answer.status == 3);
    CHECK(answer.out == "in " + checkout.path("elsewhere").string() + "\n[check]\n[my file.toml]\n[--with]\n[a=b c]\n");
    CHECK(answer.err.find("a few minutes") != std::string::npos);
    CHECK(checkout.calls().find("apt-get") == std::string::npos);
}

TEST_CASE("a second app/run configures nothing and says nothing", "[app][scripts]") {
    const Checkout checkout;
    (void)checkout.app_run("check x");
    const Answer answer = checkout.app_run("check x");
    CHECK(answer.err.empty());
    CHECK(count(checkout.calls(), "cmake ") == 1);
    CHECK(count(checkout.calls(), "ninja ") == 2);
}

TEST_CASE("app/run without a display says so, prints the demo's check and succeeds", "[app][scripts]") {
    const Checkout checkout;
    const Answer answer = checkout.app_run();
    CHECK(answer.status == 0);
    CHECK(answer.out.starts_with("There is no display here"));
    CHECK(answer.out.find("[--bin]\n[demo]\n[check]\n[" + checkout.path("a check out/app/demo/tide-gauge.toml").string() + "]\n") != std::string::npos);
}

TEST_CASE("app/run with a display opens the window on the demo", "[app][scripts]") {
    Checkout checkout;
    checkout.environment["DISPLAY"] = ":99";
    const Answer answer = checkout.app_run();
    CHECK(answer.out.find("[--bin]\n[demo]\n[" + checkout.path("a check out/app/demo/tide-gauge.toml").string() + "]\n") != std::string::npos);
    CHECK(answer.out.find("check]") == std::string::npos);
}

TEST_CASE("app/run names the missing packages before it installs them, and them alone", "[app][scripts]") {
    Checkout checkout;
    checkout.environment["MISSING"] = "libfmt-dev mold";
    const Answer answer = checkout.app_run("--version");
    CHECK(answer.err.starts_with("Installing from Debian: mold libfmt-dev\n"));
    CHECK(checkout.calls().starts_with("apt-get -qq -o DPkg::Lock::Timeout=400 update\n"
                                       "apt-get -qq -o DPkg::Lock::Timeout=400 install -y --no-install-recommends mold libfmt-dev\n"));
}

TEST_CASE("app/run uses sudo only for somebody who is not root", "[app][scripts]") {
    Checkout checkout;
    checkout.environment["MISSING"] = "mold";
    (void)checkout.app_run("--version");
    CHECK(count(checkout.calls(), "sudo") == 0);
    checkout.environment["USER_NUMBER"] = "1000";
    const Answer answer = checkout.app_run("--version");
    CHECK(count(checkout.calls(), "sudo") == 2);
    CHECK(answer.err.starts_with("Installing from Debian with sudo: mold\n"));
}

TEST_CASE("app/run asks for none of the tests' packages, and tests/run does", "[app][scripts]") {
    Checkout checkout;
    checkout.environment["MISSING"] = "catch2";
    (void)checkout.app_run("--version");
    CHECK(checkout.calls().find("apt-get") == std::string::npos);
    (void)checkout.tests_run();
    CHECK(checkout.calls().find("install -y --no-install-recommends catch2\n") != std::string::npos);
}

TEST_CASE("a build that fails shows its output and ends in 4", "[app][scripts]") {
    Checkout checkout;
    checkout.environment["NINJA_STATUS"] = "1";
    CHECK(checkout.app_run("--version").status == 4);
}

TEST_CASE("tests/run keeps what app/run has built, and hands on what stands behind its own options", "[app][scripts]") {
    const Checkout checkout;
    const std::string source = checkout.path("a check out").string();
    (void)checkout.app_run("--version");
    CHECK(checkout.tests_run("-R 'a name'").status == 0);
    CHECK(checkout.tests_run("--quick -V").status == 0);
    (void)checkout.app_run("--version");  // the tests stay switched on: nothing is configured anew
    const std::string calls = checkout.calls();
    CHECK(count(calls, "cmake ") == 2);
    CHECK(calls.find("ninja -C " + source + "/build all\n") != std::string::npos);
    CHECK(calls.find("ctest -j2 --output-on-failure -R a name\n") != std::string::npos);
    CHECK(calls.find("ninja -C " + source + "/build quick\n") != std::string::npos);
    CHECK(calls.find("ctest -j2 --output-on-failure -L quick -V\n") != std::string::npos);
    CHECK(calls.find("build-sanitize") == std::string::npos);
}

TEST_CASE("tests/run --sanitize builds beside the ordinary build", "[app][scripts]") {
    const Checkout checkout;
    CHECK(checkout.tests_run("--sanitize").status == 0);
    CHECK(checkout.calls().find("/build-sanitize -DCMAKE_BUILD_TYPE=RelWithDebInfo -DBINWRIGHT_TESTS=ON -DBINWRIGHT_SANITIZE=ON") != std::string::npos);
}

TEST_CASE("a build folder that was moved is configured anew", "[app][scripts]") {
    const Checkout checkout;
    (void)checkout.app_run("--version");
    fs::rename(checkout.path("a check out"), checkout.path("moved"));
    CHECK(checkout.start({"/bin/sh", "moved/app/run", "--version"}).status == 3);
    CHECK(count(checkout.calls(), "cmake ") == 2);
}
