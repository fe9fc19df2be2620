#include "runner/record/json_answer.hpp"

#include <catch2/catch.hpp>
#include <nlohmann/json.hpp>

#include "runner/record/run_json.hpp"
#include "tests/runner/report/sample_run.hpp"

using namespace halflsb;
using Json = nlohmann::ordered_json;

TEST_CASE("json answer: runs stand in it byte for byte", "[record]") {
    const std::string document = run_json(sample::run(), true);
    JsonAnswer answer("check", "0.1.0");
    answer.add_run(document);
    answer.add_run(document);
    const std::string text = answer.text(1);
    const std::string bare = document.substr(0, document.size() - 1);
    CHECK(text.find("\"runs\": [\n" + bare + ",\n" + bare + "\n]\n}\n") != std::string::npos);
    const Json json = Json::parse(text);
    CHECK(json.at("runs").size() == 2);
    CHECK(json.at("exit_status") == 1);
    CHECK(json.at("error").is_null());
    CHECK(json.at("list").is_null());
}

TEST_CASE("json answer: of nothing but an error it is still a document", "[record]") {
    JsonAnswer answer("", "0.1.0");
    answer.set_error({ErrorKind::usage, "", "there is no command 'x'", "look"});
    answer.set_error({ErrorKind::output, "", "later", ""});
    answer.set_problems({"a.toml:1:2: wrong\n", "b"});
    CHECK(Json::parse(answer.text(64)) ==
          Json{{"format", "halflsb"},
               {"format_version", 2},
               {"tool_version", "0.1.0"},
               {"exit_status", 64},
               {"error",
                {{"kind", "usage"}, {"place", nullptr}, {"problem", "there is no command 'x'"}, {"remedy", "look"}}},
               {"problems", {"a.toml:1:2: wrong", "b"}}});
}

TEST_CASE("json answer: each command has its own key, empty until there is something", "[record]") {
    CHECK(Json::parse(JsonAnswer("judge", "").text(65)).at("runs") == Json::array());
    CHECK(Json::parse(JsonAnswer("accept", "").text(65)).at("baselines") == Json::array());
    CHECK(Json::parse(JsonAnswer("predict", "").text(65)).at("prediction").is_null());
    CHECK(Json::parse(JsonAnswer("ports", "").text(0)).at("ports") == Json::array());
    JsonAnswer accept("accept", "");
    accept.add_baseline(
        {"b",
         {{AcceptedCase::State::changed, "tare", 12, "was 1, is 2"}, {AcceptedCase::State::stays, "old", {}, ""}},
         99,
         2});
    const Json json = Json::parse(accept.text(0)).at("baselines").at(0);
    CHECK(json.at("written_bytes") == 99);
    CHECK(json.at("cases").at(0).at("state") == "changed");
    CHECK(json.at("cases").at(0).at("first_different_samples") == 12);
    CHECK(json.at("cases").at(1).at("first_different_samples").is_null());
}
