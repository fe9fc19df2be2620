#include "runner/report/junit_report.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <pugixml.hpp>
#include <set>

#include "tests/runner/report/sample_run.hpp"

using namespace halflsb;

namespace {

/// The report of `run`, parsed again.
struct Parsed {
    explicit Parsed(const RunResult& run) : text(junit_report(run)) {
        const pugi::xml_parse_result result = document.load_string(text.c_str());
        INFO(text);
        REQUIRE(result.status == pugi::status_ok);
        suite = document.child("testsuites").child("testsuite");
    }
    pugi::xml_node test(int index) const {
        pugi::xml_node node = suite.child("testcase");
        for (; index > 0; --index) node = node.next_sibling("testcase");
        return node;
    }

    std::string text;
    pugi::xml_document document;
    pugi::xml_node suite;
};

std::string attribute(pugi::xml_node node, const char* name) { return node.attribute(name).value(); }

}  // namespace

TEST_CASE("junit: one suite with a testcase for each planned case, counted alike", "[report]") {
    const Parsed xml(sample::run());
    CHECK(xml.document.child("testsuites").next_sibling().empty());
    CHECK(xml.suite.next_sibling().empty());
    for (const pugi::xml_node node : {xml.document.child("testsuites"), xml.suite}) {
        CHECK(attribute(node, "name") == "CW-7 load-cell filter, release acceptance");
        CHECK(attribute(node, "tests") == "5");
        CHECK(attribute(node, "failures") == "1");
        CHECK(attribute(node, "errors") == "1");
        CHECK(attribute(node, "skipped") == "2");
        CHECK(attribute(node, "time") == "1.500");
    }
    CHECK(attribute(xml.suite, "timestamp") == "2026-12-01T09:30:00Z");
    std::set<std::string> names;
    int tests = 0;
    for (const pugi::xml_node test : xml.suite.children("testcase")) {
        CHECK(attribute(test, "classname") == "halflsb.cw7");
        names.insert(attribute(test, "name"));
        ++tests;
    }
    CHECK(tests == 5);
    CHECK(names.size() == 5);
}

TEST_CASE("junit: pass, failure, error, skipped, and the message in attribute and text", "[report]") {
    const Parsed xml(sample::run());
    CHECK(xml.test(0).first_child().empty());
    CHECK(attribute(xml.test(0), "time") == "0.300");

    const pugi::xml_node failure = xml.test(1).child("failure");
    const std::string failed = "error: max 1.5 LSB against 0.5: 3 of 2048 samples beyond max";
    CHECK(attribute(failure, "message") == failed);
    const std::string text = failure.text().get();
    CHECK(text.rfind(failed + "\n2/5  mains hum, half scale  fail", 0) == 0);
    CHECK(text.find("    > 1041   867.50     16384     16370  16371.500  -1.500\n") != std::string::npos);
    CHECK(text.find("\x1b") == std::string::npos);

    const pugi::xml_node error = xml.test(2).child("error");
    CHECK(attribute(error, "message").rfind("invalid: /dev/ttyUSB0: waited 2 s for block 17", 0) == 0);
    CHECK(std::string(error.text().get()).rfind(attribute(error, "message") + "\n", 0) == 0);

    CHECK(attribute(xml.test(3).child("skipped"), "message") ==
          "undecided: latency: the response fits the reference at no lag from -64 to 64 samples");
    CHECK(attribute(xml.test(4).child("skipped"), "message") == "not run");
    CHECK(std::string(xml.test(4).child("skipped").text().get()) == "not run");
}

TEST_CASE("junit: a run that ended early is an error of its own, never a page of skipped cases", "[report]") {
    RunResult run = sample::run();
    run.cases.clear();
    run.ended_by =
        Error{ErrorKind::bench, "/dev/ttyUSB0", "waited 3 s for a greeting, nothing came", "is the board on?"};
    const Parsed xml(run);
    CHECK(attribute(xml.suite, "tests") == "6");
    CHECK(attribute(xml.suite, "errors") == "1");
    CHECK(attribute(xml.suite, "skipped") == "5");
    CHECK(attribute(xml.test(5), "name") == "(the run)");
    CHECK(attribute(xml.test(5).child("error"), "message") ==
          "/dev/ttyUSB0: waited 3 s for a greeting, nothing came\n  is the board on?");
}

TEST_CASE("junit: hostile names come back whole, and nothing that XML forbids is written", "[report]") {
    RunResult run = sample::run();
    const std::string hostile = "<&\"'>]]>\x01\x1b[31m\xff\xEF\xBF\xBE\r end";
    const std::string shown = "<&\"'>]]>\\x01\\x1b[31m\xEF\xBF\xBD\xEF\xBF\xBD\\x0d end";
    run.title = run.plan_file = hostile;
    run.cases[1].name = run.cases_planned[1] = hostile;
    run.cases[1].rules[0].reason = hostile;
    run.cases[2].invalid = Error{ErrorKind::bench, hostile, hostile, hostile};
    const Parsed xml(run);
    CHECK(attribute(xml.test(1), "name") == shown);
    CHECK(attribute(xml.suite, "name") == shown);
    CHECK(attribute(xml.test(1).child("failure"), "message") == "error: max 1.5 LSB against 0.5: " + shown);
    for (const char c : xml.text) {
        const bool forbidden = static_cast<unsigned char>(c) < 0x20 && c != '\n' && c != '\t';
        REQUIRE_FALSE(forbidden);
    }
    // As a numeric reference it would be forbidden as well.
    CHECK(xml.text.find("&#x1") == std::string::npos);
    CHECK(xml.text.find("&#1;") == std::string::npos);
    CHECK(xml.text.find("&#27;") == std::string::npos);
}

TEST_CASE("junit: names that become the same in XML stay apart", "[report]") {
    RunResult run = sample::run();
    run.cases[0].name = "a\xff";
    run.cases[1].name = "a\xfe";
    const Parsed xml(run);
    CHECK(attribute(xml.test(0), "name") == "a\xEF\xBF\xBD");
    CHECK(attribute(xml.test(1), "name") == "a\xEF\xBF\xBD (2)");
}

TEST_CASE("junit: the class name holds one dot, whatever the plan's path", "[report]") {
    RunResult run = sample::run();
    run.plan_file = "plans.d/cw7.v2.toml";
    CHECK(attribute(Parsed(run).test(0), "classname") == "halflsb.cw7_v2");
    run.plan_file = ".toml";
    CHECK(attribute(Parsed(run).test(0), "classname") == "halflsb.plan");
}

TEST_CASE("junit: a figure that was not measured breaks nothing", "[report]") {
    RunResult run = sample::run();
    run.cases[1].rules[0].figures[0].value = std::nan("");
    run.cases[1].rules[0].reason.clear();
    CHECK(attribute(Parsed(run).test(1).child("failure"), "message") == "error: max not a number LSB against 0.5");
    run.cases[1].rules.clear();
    CHECK(attribute(Parsed(run).test(1).child("failure"), "message") == "fail");
}
