using System.Text.Json;
using Pipeline.Commands;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Night;

/// <summary>The commands as a user types them, on the shipped day.</summary>
[Collection("console")]
public class NightTests
{
    [Fact]
    public async Task Night_ShippedDay_JudgesEveryRunAsItWasMade()
    {
        using var demo = new DemoDay();
        (int code, string said) = await Run("night", demo.Day, "--results", demo.Results);
        Assert.Equal(CommandLine.SomeFailed, code);
        string results = Path.Combine(demo.Results, "2026-11-23");
        Assert.Equal("agrees", Judgement(results, "0912-free"));
        Assert.Equal("agrees", Judgement(results, "0957-free-wide"));
        Assert.Equal("agrees", Judgement(results, "1043-slowed"));
        Assert.Equal("agrees", Judgement(results, "1125-slowed"));
        Assert.Equal("disagrees", Judgement(results, "1310-slowed"));
        Assert.Equal("disagrees", Judgement(results, "1402-slowed"));
        Assert.Equal("undecided", Judgement(results, "1515-weak"));
        Assert.False(File.Exists(Path.Combine(results, "1600-slowed", "result.json")));
        Assert.Contains("1600-slowed.h5: found 35656 bytes of", said, StringComparison.Ordinal);
        Assert.Contains("1600-slowed", await File.ReadAllTextAsync(Path.Combine(results, "night.html")), StringComparison.Ordinal);
        // two runs that share a beam, with one spectrum; the truth is that of the first
        JsonElement joint = Result(results, "beam-off").GetProperty("conditions");
        Assert.Equal(["off, 0912-free", "off, 1545-doppler"], joint.EnumerateObject().Select(c => c.Name));
        Assert.Equal(joint.GetProperty("off, 0912-free").GetProperty("mean_velocity_m_per_s").GetRawText(), joint.GetProperty("off, 1545-doppler").GetProperty("mean_velocity_m_per_s").GetRawText());
        // nothing half-written is left
        Assert.Empty(Directory.GetFiles(results, "*.part", SearchOption.AllDirectories));
        AssertTruth(results);
    }

    /// <summary>What nature did in the invented day is within three standard errors, for every run and condition.</summary>
    static void AssertTruth(string results)
    {
        JsonElement truth = JsonDocument.Parse(File.ReadAllBytes(Path.Combine(Repository.Root, "sample-data", "2026-11-23", "truth.json"))).RootElement.GetProperty("runs");
        foreach (string run in (string[])["0912-free", "0957-free-wide", "1043-slowed", "1125-slowed", "1402-slowed", "1515-weak", "1545-doppler"])
        {
            JsonElement conditions = Result(results, run).GetProperty("conditions");
            JsonElement expected = truth.EnumerateObject().Single(p => Path.GetFileNameWithoutExtension(p.Name) == run).Value;
            foreach (JsonProperty condition in conditions.EnumerateObject())
                foreach (string quantity in (string[])["molecules_per_shot", "mean_velocity_m_per_s"])
                {
                    JsonElement q = condition.Value.GetProperty(quantity);
                    double value = q.GetProperty("value").GetDouble(), error = double.Hypot(q.GetProperty("statistical").GetDouble(), q.GetProperty("systematic").GetDouble());
                    double should = expected.GetProperty(condition.Name).GetProperty(quantity).GetDouble();
                    Assert.True(Math.Abs(value - should) < 3 * error, $"{run} {condition.Name} {quantity}: {value} ± {error}, made with {should}");
                }
        }
    }

    /// <summary>A scan takes the zero of its axis from the scan across the beam, and says so; without one it is not analysed.</summary>
    [Fact]
    public async Task Night_DopplerScan_TakesItsZeroFromTheScanAcrossTheBeam()
    {
        using var demo = new DemoDay("1530-across", "1545-doppler");
        await Run("night", demo.Day, "--results", demo.Results);
        string results = Path.Combine(demo.Results, "2026-11-23");
        JsonElement zero = Result(results, "1530-across").GetProperty("conditions").GetProperty("off").GetProperty("others").GetProperty("frequency zero");
        // the invented day reads 4 MHz on the line
        double error = double.Hypot(zero.GetProperty("statistical").GetDouble(), zero.GetProperty("systematic").GetDouble());
        Assert.InRange(zero.GetProperty("value").GetDouble(), 4e6 - 3 * error, 4e6 + 3 * error);
        Assert.Equal(["1545-doppler.h5", "1530-across.h5"], Result(results, "1545-doppler").GetProperty("provenance").GetProperty("inputs").EnumerateArray().Select(i => i.GetProperty("file").GetString()));
        File.Delete(Path.Combine(demo.Day, "1530-across.h5"));
        (int code, string said) = await Run("night", demo.Day, "--results", demo.Results);
        Assert.Equal(CommandLine.SomeFailed, code);
        Assert.Contains("no scan across the beam \"*-across\"", said, StringComparison.Ordinal);
        Assert.False(File.Exists(Path.Combine(results, "1545-doppler", "result.json")));
    }

    [Fact]
    public async Task Night_Twice_GivesTheSameBytes()
    {
        using var demo = new DemoDay("1515-weak", "0957-free-wide");
        string again = Path.Combine(demo.Root, "again");
        await Run("night", demo.Day, "--results", demo.Results);
        await Run("night", demo.Day, "--results", again);
        // and once more on top of what is there: stages are reused
        await Run("night", demo.Day, "--results", again);
        string[] files = [.. Directory.GetFiles(demo.Results, "*", SearchOption.AllDirectories).Where(f => !f.EndsWith(".jsonl", StringComparison.Ordinal))];
        Assert.Equal(16, files.Length);
        foreach (string file in files)
            Assert.True(File.ReadAllBytes(file).AsSpan().SequenceEqual(File.ReadAllBytes(Path.Combine(again, Path.GetRelativePath(demo.Results, file)))), file);
    }

    [Fact]
    public async Task Stages_OneAfterTheOther_ReuseAndEndAsTheNight()
    {
        using var demo = new DemoDay("1515-weak");
        (int ingest, string first) = await Run("ingest", demo.Day, "1515-weak", "--results", demo.Results);
        (int fit, string second) = await Run("fit", demo.Day, "1515-weak.h5", "--results", demo.Results);
        (int compare, string third) = await Run("compare", demo.Day, "1515-weak", "--results", demo.Results);
        Assert.Equal((0, 0, CommandLine.SomeDoNot), (ingest, fit, compare));
        Assert.DoesNotContain("reused", first, StringComparison.Ordinal);
        Assert.Contains("reused from an earlier ingest", second, StringComparison.Ordinal);
        Assert.Contains("reused from an earlier fit", third, StringComparison.Ordinal);
        byte[] staged = File.ReadAllBytes(Path.Combine(demo.Results, "2026-11-23", "1515-weak", "result.json"));
        string fresh = Path.Combine(demo.Root, "fresh");
        await Run("night", demo.Day, "--results", fresh);
        Assert.Equal(File.ReadAllBytes(Path.Combine(fresh, "2026-11-23", "1515-weak", "result.json")), staged);
    }

    [Fact]
    public async Task Fit_ConfigurationChanged_IsDoneAgain()
    {
        using var demo = new DemoDay("1515-weak");
        await Run("fit", demo.Day, "1515-weak", "--results", demo.Results);
        File.AppendAllText(Path.Combine(demo.Root, "config", "apparatus.toml"), "\n# moved\n");
        (_, string said) = await Run("fit", demo.Day, "1515-weak", "--results", demo.Results);
        Assert.DoesNotContain("reused", said, StringComparison.Ordinal);
    }

    [Fact]
    public async Task Result_Json_HoldsWhatTheReadmePromises()
    {
        using var demo = new DemoDay("1515-weak");
        await Run("night", demo.Day, "--results", demo.Results);
        JsonElement result = Result(Path.Combine(demo.Results, "2026-11-23"), "1515-weak");
        Assert.Equal(1, result.GetProperty("schema_version").GetInt32());
        JsonElement on = result.GetProperty("conditions").GetProperty("on");
        foreach (string quantity in (string[])["molecules_per_shot", "mean_velocity_m_per_s", "spread_m_per_s"])
            foreach (string part in (string[])["value", "statistical", "systematic"]) Assert.True(on.GetProperty(quantity).GetProperty(part).GetDouble() > 0);
        foreach (string part in (string[])["capture_m_per_s", "molecules_per_shot", "low", "high", "confidence"])
            Assert.Equal(JsonValueKind.Number, on.GetProperty("below_capture").GetProperty(part).ValueKind);
        Assert.True(result.GetProperty("verdict").GetProperty("reasons").GetArrayLength() > 0);
        Assert.Equal(6, result.GetProperty("verdict").GetProperty("questions").GetArrayLength());
        JsonElement provenance = result.GetProperty("provenance");
        Assert.Equal(64, provenance.GetProperty("inputs")[0].GetProperty("sha256").GetString()!.Length);
        foreach (string key in (string[])["configuration_sha256", "program", "numerical_version", "seed", "reader"]) Assert.True(provenance.TryGetProperty(key, out _), key);
        // nothing of the place where it was made
        Assert.DoesNotContain(demo.Root, result.GetRawText(), StringComparison.Ordinal);
    }

    [Fact]
    public async Task Night_NoRunsOrNoFolder_IsAUsageFault()
    {
        using var demo = new DemoDay("1515-weak");
        (int missing, string said) = await Run("night", Path.Combine(demo.Root, "no-such-day"), "--results", demo.Results);
        Assert.Equal(CommandLine.Usage, missing);
        Assert.Contains("no such folder", said, StringComparison.Ordinal);
        string empty = Directory.CreateDirectory(Path.Combine(demo.Root, "empty")).FullName;
        (int none, said) = await Run("night", empty, "--results", demo.Results);
        Assert.Equal(CommandLine.Usage, none);
        Assert.Contains("no file that a [[runs]] rule matches", said, StringComparison.Ordinal);
        Assert.Equal(CommandLine.Usage, (await Run("nigth", demo.Day)).Code);
        Assert.Equal(CommandLine.Usage, (await Run("fit", demo.Day, "1515-week", "--results", demo.Results)).Code);
    }

    [Fact]
    public async Task Night_MissingPrediction_NamesItAndAnalysesTheOthers()
    {
        using var demo = new DemoDay("1515-weak", "0957-free-wide");
        File.Delete(Path.Combine(demo.Day, "predictions", "decelerated.csv"));
        (int code, string said) = await Run("night", demo.Day, "--results", demo.Results);
        Assert.Equal(CommandLine.SomeFailed, code);
        Assert.Contains("decelerated.csv", said, StringComparison.Ordinal);
        Assert.Equal("agrees", Judgement(Path.Combine(demo.Results, "2026-11-23"), "0957-free-wide"));
    }

    [Fact]
    public async Task Fit_ManyShotsCut_SaysWhatAllOfThemWouldGive()
    {
        using var demo = new DemoDay("0957-free-wide");
        string night = Path.Combine(demo.Root, "config", "night.toml");
        File.WriteAllText(night, File.ReadAllText(night).Replace("unlocked_beyond = \"40 MHz\"", "unlocked_beyond = \"1 MHz\"", StringComparison.Ordinal));
        await Run("night", demo.Day, "--results", demo.Results);
        JsonElement result = Result(Path.Combine(demo.Results, "2026-11-23"), "0957-free-wide");
        Assert.True(result.GetProperty("shots").GetProperty("cut")[0].GetProperty("count").GetInt32() >= 2);
        Assert.Contains(result.GetProperty("remarks").EnumerateArray(), r => r.GetString()!.Contains("with all of them the number would be", StringComparison.Ordinal));
    }

    [Fact]
    public async Task Follow_FileThatGrows_IsAnalysedWhenItIsWhole()
    {
        using var demo = new DemoDay("1515-weak");
        string path = Path.Combine(demo.Day, "1515-weak.h5");
        byte[] whole = File.ReadAllBytes(path);
        File.WriteAllBytes(path, whole[..(whole.Length / 2)]);
        Task<(int Code, string Said)> following = Run("follow", demo.Day, "--results", demo.Results, "--every", "0.2", "--until-idle", "10");
        await Told(Path.Combine(demo.Results, "2026-11-23", "follow.log.jsonl"), "not analysed yet");
        await File.WriteAllBytesAsync(path, whole);
        (int code, string said) = await following;
        Assert.Equal(CommandLine.SomeDoNot, code);
        Assert.Contains("not analysed yet", said, StringComparison.Ordinal);
        string results = Path.Combine(demo.Results, "2026-11-23");
        Assert.Equal("undecided", Judgement(results, "1515-weak"));
        // started again it fits nothing anew: the stage files keep their bytes and times
        DateTime fitted = File.GetLastWriteTimeUtc(Path.Combine(results, "1515-weak", "fit.json"));
        await Run("follow", demo.Day, "--results", demo.Results, "--every", "0.1", "--until-idle", "0.5");
        Assert.Equal(fitted, File.GetLastWriteTimeUtc(Path.Combine(results, "1515-weak", "fit.json")));
    }

    [Fact]
    public async Task Check_ShippedAndBroken_SaysSo()
    {
        using var demo = new DemoDay("1515-weak");
        string config = Path.Combine(demo.Root, "config");
        Assert.Equal(0, (await Run("check", "--config", config)).Code);
        File.AppendAllText(Path.Combine(config, "night.toml"), "\nnonsense = 1\n");
        (int code, string said) = await Run("check", "--config", config);
        Assert.Equal(CommandLine.Usage, code);
        Assert.Contains("night.toml, line ", said, StringComparison.Ordinal);
    }

    /// <summary>Waits until a log that is still being written says something.</summary>
    static async Task Told(string log, string what)
    {
        for (int tries = 0; tries < 600; tries++, await Task.Delay(100))
        {
            if (!File.Exists(log)) continue;
            using var reader = new StreamReader(new FileStream(log, FileMode.Open, FileAccess.Read, FileShare.ReadWrite | FileShare.Delete));
            if ((await reader.ReadToEndAsync()).Contains(what, StringComparison.Ordinal)) return;
        }
        Assert.Fail($"the log never said \"{what}\"");
    }

    static string Judgement(string results, string run) => Result(results, run).GetProperty("verdict").GetProperty("judgement").GetString()!;

    static JsonElement Result(string results, string run) =>
        JsonDocument.Parse(File.ReadAllBytes(Path.Combine(results, run, "result.json"))).RootElement;

    static async Task<(int Code, string Said)> Run(params string[] arguments)
    {
        (TextWriter output, TextWriter error) = (Console.Out, Console.Error);
        using var said = new StringWriter();
        TextWriter shared = TextWriter.Synchronized(said);
        try
        {
            Console.SetOut(shared);
            Console.SetError(shared);
            return (await CommandLine.Run(arguments), said.ToString());
        }
        finally
        {
            Console.SetOut(output);
            Console.SetError(error);
        }
    }
}
