#include "runner/config/repository.hpp"

#include <catch2/catch.hpp>

#include "tests/support/fake_files.hpp"
#include "tests/support/temporary_folder.hpp"

using namespace halflsb;

namespace {

FakeFiles files_with(const std::vector<std::string>& paths) {
    FakeFiles files;
    for (const std::string& path : paths) files.contents[path] = "";
    return files;
}

}  // namespace

TEST_CASE("repository: a rig beside the plan is warned about, one of the lab is not", "[config]") {
    FakeFiles files = files_with(
        {"/src/fw/test/plan.toml", "/src/fw/rigs/rig.toml", "/lab/rig.toml", "/lab2/rig.toml", "/lab2/plan.toml"});
    CHECK(!rig_in_repository_warning("/src/fw/rigs/rig.toml", "/src/fw/test/plan.toml", files));
    files.folders = {"/src/fw/.git", "/lab/.git"};
    CHECK(rig_in_repository_warning("/src/fw/rigs/rig.toml", "/src/fw/test/plan.toml", files) ==
          "warning: the rig /src/fw/rigs/rig.toml lies in the plan's repository /src/fw: who changes the plan there "
          "can change the commands that run here\n"
          "  keep rig files in a folder of the lab, outside the firmware's repository");
    CHECK(!rig_in_repository_warning("/lab/rig.toml", "/src/fw/test/plan.toml", files));
    CHECK(!rig_in_repository_warning("/lab2/rig.toml", "/lab2/plan.toml", files));
    CHECK(!rig_in_repository_warning("/none.toml", "/src/fw/test/plan.toml", files));
}

TEST_CASE("repository: a submodule's .git is a file, and / is the last folder asked", "[config]") {
    FakeFiles files = files_with({"/a/b/plan.toml", "/a/b/.git", "/plan.toml"});
    CHECK(repository_of("/a/b/plan.toml", files) == "/a/b");
    CHECK(repository_of("/plan.toml", files).empty());
    files.folders = {"/.git"};
    CHECK(repository_of("/plan.toml", files) == "/");
}

TEST_CASE("repository: links are followed on the disk", "[config]") {
    const TemporaryFolder folder;
    DiskFiles files;
    REQUIRE(files.make_directories(folder / "fw/.git"));
    REQUIRE(files.make_directories(folder / "lab"));
    REQUIRE(files.write(folder / "fw/rig.toml", std::string("x")));
    std::filesystem::create_symlink(folder / "fw/rig.toml", folder / "lab/rig.toml");
    CHECK(repository_of(folder / "lab/rig.toml", files) == folder / "fw");
}
