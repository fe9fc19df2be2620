// Whatever a rig holds, its reader answers: a rig that can be used, or whole messages.
#include <string>

#include "runner/config/rig_file.hpp"
#include "tests/fuzz/problem_text.hpp"
#include "tests/support/fake_files.hpp"

using namespace halflsb;

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
    FakeFiles files;
    files.contents["lab/rig.toml"] = std::string(reinterpret_cast<const char*>(data), size);
    const auto read = read_rig("lab/rig.toml", files);
    if (const auto* problems = std::get_if<ReadProblems>(&read)) {
        fuzz::require_whole_messages(*problems, {"lab/rig.toml"});
        return 0;
    }
    const Rig& rig = std::get<Rig>(read);
    const std::string& text = files.contents["lab/rig.toml"];
    fuzz::require(text.find("isolated") != std::string::npos && text.find("true") != std::string::npos,
                  "no rig without a statement that it is isolated");
    fuzz::require(rig.folder == "lab", "commands run in the rig's folder", rig.folder);
    fuzz::require(!rig.port.empty() && rig.baud > 0 && rig.block_samples > 0, "a rig can be opened");
    fuzz::require(rig.answer_s > 0.0 && rig.greet_s > 0.0 && rig.before_run_limit_s > 0.0, "every wait has an end");
    for (const auto& command : rig.before_run) {
        fuzz::require(!command.empty() && !command[0].empty(), "a command has a program");
        fuzz::require(with_image(command, "a b").size() == command.size(), "the image adds no argument");
    }
    return 0;
}
