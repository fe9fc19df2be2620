// The run as JUnit-style XML, for the test pages of continuous-integration servers.
//
// No schema of it is authoritative. What is written is the subset that two widely used readers were
// seen to take alike (their parsers' sources; docs/run-folder.md): one testsuites, one testsuite, a
// testcase per planned case with a unique classname and name; failure for fail, error for invalid,
// skipped for undecided and not run; the message both as attribute and as text.
#pragma once

#include <string>
#include <string_view>

#include "runner/world/result.hpp"

namespace halflsb {

/// The whole document. A run that ended before its last case has one more testcase, "(the run)", with
/// the reason as error, because a reader would show a page of skipped cases as green.
std::string junit_report(const RunResult& run);

/// `text` as XML 1.0 may hold it: what it forbids becomes visible, a control character "\x1b", a byte
/// that is no UTF-8 or a noncharacter U+FFFD. Line breaks and tabs stay.
std::string xml_text(std::string_view text);

}  // namespace halflsb
