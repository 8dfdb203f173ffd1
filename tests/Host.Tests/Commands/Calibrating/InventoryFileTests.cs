using System.Text;
using Lampwarden.Host.Commands;
using Lampwarden.Host.Commands.Calibrating;
using Lampwarden.Host.Configuration;

namespace Lampwarden.Host.Tests.Commands.Calibrating;

public sealed class InventoryFileTests
{
    private const string Before = """
        {
          // Two lamps, one of them measured.
          "lamps": [
            { "ratedWatts": 60, "ratedVolts": 120, "name": "north" }, // on the left
            { "name": "south", "ratedWatts": 60, "calibration": { "coldOhms": 17, /* in May */ "roomCelsius": 20 }, "ratedVolts": 120, },
          ],
          "benches": [ { "name": "b", "mains": "120 V 60 Hz", "bank": "north", "unit": "resistor 300 ohm",
            "meters": [ { "name": "line", "transport": { "port": "/dev/ttyUSB0" } } ] } ]
        }
        """;

    private static readonly LampCalibrationOptions Measured = new() { ColdOhms = 16.1, RoomCelsius = 22, ShortedAmps = 0.497, ShortedVolts = 119.4 };

    [Fact]
    public void Edit_LampWithoutCalibration_PutsItBehindTheLastValueAndLeavesTheRestAlone() =>
        Assert.Equal(Before.Replace("\"name\": \"north\" }", "\"name\": \"north\", \"calibration\": {X} }", StringComparison.Ordinal), Edit("north"));

    [Fact]
    public void Edit_LampWithOne_ReplacesItWhole() =>
        Assert.Equal(Before.Replace("{ \"coldOhms\": 17, /* in May */ \"roomCelsius\": 20 }", "{X}", StringComparison.Ordinal), Edit("SOUTH"));

    [Fact]
    public void Edit_LampThatIsNotThere_SaysWhatToDo() =>
        Assert.Contains("add it to lamps first", Assert.Throws<BadInputException>(() => Edit("west")).Message, StringComparison.Ordinal);

    [Fact]
    public void Write_GoodValues_ExchangesTheFileAndKeepsTheOldOne()
    {
        var path = NewFile();

        var backup = InventoryFile.Write(path, "north", Measured, new DateTimeOffset(2026, 2, 3, 4, 5, 6, TimeSpan.Zero));

        Assert.Equal(path + ".20260203-040506.bak", backup);
        Assert.Equal(Before, File.ReadAllText(backup));
        var calibration = ConfigurationFile.Load(path).Lamps[0].Calibration!;
        Assert.Equal((16.1, 22.0, 0.497, 119.4), (calibration.ColdOhms, calibration.RoomCelsius, calibration.ShortedAmps, calibration.ShortedVolts));
        Assert.Equal(2, Directory.GetFiles(Path.GetDirectoryName(path)!).Length);
    }

    [Fact]
    public void Write_ValuesThatTheRulesRefuse_LeavesTheFileAsItWas()
    {
        var path = NewFile();

        Assert.Throws<ConfigurationException>(() => InventoryFile.Write(path, "north", new LampCalibrationOptions { ColdOhms = -3 }, DateTimeOffset.UnixEpoch));

        Assert.Equal(Before, File.ReadAllText(path));
        Assert.Single(Directory.GetFiles(Path.GetDirectoryName(path)!));
    }

    private static string Edit(string lamp) => Encoding.UTF8.GetString(InventoryFile.Edit(Encoding.UTF8.GetBytes(Before), lamp, "{X}"));

    private static string NewFile()
    {
        var path = Path.Combine(Directory.CreateTempSubdirectory("lampwarden-calibrate-").FullName, "bench.json");
        File.WriteAllText(path, Before);
        return path;
    }
}
