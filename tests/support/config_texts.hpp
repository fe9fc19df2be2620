// A good plan and a good rig for tests to spoil, and what the readers say of them.
#pragma once

#include <catch2/catch.hpp>
#include <string>
#include <variant>
#include <vector>

#include "runner/config/plan_file.hpp"
#include "runner/config/rig_file.hpp"
#include "runner/config/source_text.hpp"
#include "tests/support/fake_files.hpp"

namespace halflsb {

// Line numbers are part of the tests: append, do not insert.
inline const std::string good_plan =
    "title = \"CW-7 load cell\"\n"                                            // 1
    "\n"                                                                      // 2
    "[signal]\n"                                                              // 3
    "rate_hz = 1200.0\n"                                                      // 4
    "input = \"q15\"\n"                                                       // 5
    "output = \"q15\"\n"                                                      // 6
    "unit = \"g\"\n"                                                          // 7
    "full_scale_unit = 6000.0\n"                                              // 8
    "\n"                                                                      // 9
    "[[filter]]\n"                                                            // 10
    "kind = \"fir\"\n"                                                        // 11
    "taps = [0.25, 0.5, 0.25]\n"                                              // 12
    "\n"                                                                      // 13
    "[[rule]]\n"                                                              // 14
    "kind = \"error\"\n"                                                      // 15
    "max_lsb = 1.5\n"                                                         // 16
    "\n"                                                                      // 17
    "[[case]]\n"                                                              // 18
    "name = \"belt noise\"\n"                                                 // 19
    "[case.stimulus]\n"                                                       // 20
    "shape = \"noise\"\n"                                                     // 21
    "length_samples = 4096\n"                                                 // 22
    "seed = 7\n"                                                              // 23
    "[[case.rule]]\n"                                                         // 24
    "kind = \"response\"\n"                                                   // 25
    "bands = [{ from_hz = 10.0, to_hz = 100.0, min_db = -3, max_db = 1 }]\n"  // 26
    "\n"                                                                      // 27
    "[[case]]\n"                                                              // 28
    "name = \"tare step\"\n"                                                  // 29
    "[case.stimulus]\n"                                                       // 30
    "shape = \"step\"\n"                                                      // 31
    "length_samples = 256\n";                                                 // 32

inline const std::string good_rig =
    "[board]\n"                   // 1
    "name = \"CW-7, bench 3\"\n"  // 2
    "isolated = true\n"           // 3
    "[link]\n"                    // 4
    "use = \"serial\"\n"          // 5
    "port = \"usb:0403:6001\"\n"  // 6
    "[wire]\n"                    // 7
    "form = \"framed\"\n";        // 8

/// `text` with the one place where `from` stands replaced.
inline std::string with(std::string text, const std::string& from, const std::string& to) {
    const std::size_t at = text.find(from);
    REQUIRE(at != std::string::npos);
    return text.replace(at, from.size(), to);
}

/// The whole message about one line of a text, counted from 1, at the column of `at` in it.
inline std::string message(const std::string& text, int line, const std::string& at, const std::string& problem,
                           const std::string& remedy, const std::string& file = "plan.toml") {
    const SourceText source(file, text);
    const std::size_t column = source.line(line).find(at);
    REQUIRE(column != std::string_view::npos);
    return file + ":" + std::to_string(line) + ":" + std::to_string(column + 1) + ": " + problem + "\n    " +
           std::string(source.line(line)) + "\n    " + std::string(column, ' ') + "^\n  " + remedy + "\n";
}

inline std::string joined(const ReadProblems& problems) {
    std::string all;
    for (const std::string& text : problems.texts) all += text + "\n";
    return all;
}

/// The messages about a plan of that text, one after the other, "" for a good one.
inline std::string plan_problems(const std::string& text, FakeFiles files = {}, const PlanOptions& options = {}) {
    files.contents["plan.toml"] = text;
    const auto read = read_plan("plan.toml", files, options);
    const auto* problems = std::get_if<ReadProblems>(&read);
    return problems == nullptr ? std::string() : joined(*problems);
}

inline std::string rig_problems(const std::string& text) {
    FakeFiles files;
    files.contents["lab/rig.toml"] = text;
    const auto read = read_rig("lab/rig.toml", files);
    const auto* problems = std::get_if<ReadProblems>(&read);
    return problems == nullptr ? std::string() : joined(*problems);
}

inline Plan plan_of(const std::string& text, FakeFiles files = {}, const PlanOptions& options = {}) {
    files.contents["plan.toml"] = text;
    auto read = read_plan("plan.toml", files, options);
    if (const auto* problems = std::get_if<ReadProblems>(&read)) FAIL(joined(*problems));
    return std::get<Plan>(std::move(read));
}

inline Rig rig_of(const std::string& text) {
    FakeFiles files;
    files.contents["lab/rig.toml"] = text;
    auto read = read_rig("lab/rig.toml", files);
    if (const auto* problems = std::get_if<ReadProblems>(&read)) FAIL(joined(*problems));
    return std::get<Rig>(std::move(read));
}

}  // namespace halflsb
