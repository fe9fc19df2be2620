#include "runner/record/baseline_toml.hpp"

#include "runner/world/toml_quoted.hpp"

namespace halflsb {

std::string baseline_toml(const BaselineContent& content) {
    std::string out =
        "# Written by halflsb accept; the rule `unchanged` compares with it. docs/release.md tells how it is kept.\n";
    const auto line = [&](const std::string& key, const std::string& value) { out += key + " = " + value + "\n"; };
    line("title", toml_quoted(content.title));
    line("accepted_utc", toml_quoted(content.accepted_utc));
    line("tool_version", toml_quoted(content.tool_version));
    line("board_serial", toml_quoted(content.board_serial));
    line("build_id", toml_quoted(content.build_id));
    line("plan_sha256", toml_quoted(content.plan_sha256));
    line("output", toml_quoted(content.output));
    line("channels", std::to_string(content.channels));
    for (const BaselineCase& kept : content.cases) {
        out += "\n[[case]]\n";
        line("name", toml_quoted(kept.name));
        line("samples", std::to_string(kept.samples));
        line("stimulus_sha256", toml_quoted(kept.stimulus_sha256));
        line("response_sha256", toml_quoted(kept.response_sha256));
        line("kept", toml_quoted(kept.kept));
        line("kept_samples", std::to_string(kept.kept_samples));
        line("block_samples", std::to_string(kept.block_samples));
        if (kept.block_sha256.empty()) {
            line("block_sha256", "[]");
            continue;
        }
        // A hash a line: a version control system then shows which stretch changed.
        out += "block_sha256 = [\n";
        for (const std::string& sha256 : kept.block_sha256) out += "    " + toml_quoted(sha256) + ",\n";
        out += "]\n";
    }
    return out;
}

}  // namespace halflsb
