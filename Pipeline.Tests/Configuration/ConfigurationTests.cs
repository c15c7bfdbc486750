using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Ingest;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Configuration;

public sealed class ConfigurationTests : IDisposable
{
    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-config").FullName;

    public ConfigurationTests() => CopyShipped();

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Fact]
    public void Read_ShippedConfiguration_GivesItsValuesInSi()
    {
        LabConfiguration lab = ConfigurationReader.Read(_folder);
        Assert.Equal(0.82, lab.Setup.Beamline.SourceToProbe.Value, 12);
        Assert.Equal(0.0008, lab.Setup.Beamline.SourceToProbe.Sigma, 12);
        // 45 GHz times the Planck constant (exact in the SI)
        Assert.Equal(45e9 * 6.62607015e-34, lab.Setup.Beamline.Decelerator!.EnergyPerStage.Value, 1e-36);
        Assert.Equal(Math.PI / 2, lab.Setup.Probe.Angle.Value, 12);
        // 0.6 MHz of jitter and 0.5 m/s over 663.3 nm, in quadrature
        Assert.Equal(Math.Sqrt(0.6e6 * 0.6e6 + Math.Pow(0.5 / 663.3e-9, 2)), lab.Setup.Probe.DetuningSpread.Value, 1e-3);
        Assert.Equal(1.6e-3, lab.Setup.Detector.Efficiency.Value, 12);
        Assert.IsType<ExponentialGaussianEmission>(lab.Setup.Emission);
        Assert.Equal(FlightKind.Decelerated, lab.Setup.Conditions["on"]);
        Assert.IsType<Hdf5MatrixLayout>(lab.ShotLayouts["hdf5-matrix"]);
        Assert.Equal(1e-6, ((WideCsvLayout)lab.ShotLayouts["csv-wide"]).TimeFactor);
        Assert.Equal(2, lab.Predictions.Count);
    }

    [Theory]
    [InlineData("best", "2", 2)]
    [InlineData("two-beams", "0", 0)]
    [InlineData("spline", "6", 6)]
    public void Read_Shape_IsThatOfTheFit(string shape, string power, double expected)
    {
        string path = Path.Combine(_folder, "night.toml");
        File.WriteAllText(path, File.ReadAllText(path).Replace("shape = \"supersonic\"", $"shape = \"{shape}\"", StringComparison.Ordinal).Replace("shape_power = 3", $"shape_power = {power}", StringComparison.Ordinal));
        Pipeline.Fitting.FitSettings fit = ConfigurationReader.Read(_folder).Analysis.Fit;
        Assert.Equal((shape, expected), (fit.Shape, fit.ShapePower));
    }

    /// <summary>One file with two detectors gives two runs, each with its own efficiency.</summary>
    [Fact]
    public void Read_SecondDetector_GivesRunsOfItsOwn()
    {
        File.AppendAllText(Path.Combine(_folder, "apparatus.toml"), "\n[detectors.side]\nkind = \"analog\"\nefficiency = \"2.0e-3 ± 1e-4\"\nvolt_second_per_electron = \"1.6e-7 ± 3e-9 V s\"\ntime_constant = \"50 us\"\ncoupling_time = \"20 ± 1 ms\"\nexcess_noise = \"1.3\"\n");
        File.AppendAllText(Path.Combine(_folder, "night.toml"), "\n[[runs]]\nmatch = \"*.h5\"\nname = \"{file}-side\"\nmode = \"arrival\"\nlayout = \"hdf5-matrix\"\ndetector = \"side\"\n");
        LabConfiguration lab = ConfigurationReader.Read(_folder);
        using var demo = new DemoDay("1515-weak");
        Pipeline.Night.DayFolder day = Pipeline.Night.DayFolder.Open(demo.Day, lab);
        Assert.Equal(["1515-weak", "1515-weak-side"], day.Runs.Select(r => r.Name));
        Setup side = lab.SetupFor(day.Find("1515-weak-side").Rule);
        Assert.Equal((0.002, DetectorKind.Analog, 0.02, 1.3), (side.Detector.Efficiency.Value, side.Detector.Kind, side.Detector.CouplingTime.Value, side.Detector.ExcessNoise.Value));
        Assert.Equal(1.6e-3, lab.SetupFor(day.Find("1515-weak").Rule).Detector.Efficiency.Value, 12);
        // the gain is as uncertain as it says, and counted once
        Nuisance gain = Nuisances.Of(side).Single(n => n.Name == "gain");
        Assert.Equal(0.002 * (1 + 3e-9 / 1.6e-7), gain.Shift(side, 1).Detector.Efficiency.Value, 1e-9);
    }

    [Theory]
    [InlineData("name = \"side\"", "{file}")]
    [InlineData("name = \"{file}-side\"\ndetector = \"sied\"", "side")]
    public void Read_SecondDetectorWrong_SaysWhat(string keys, string expected)
    {
        File.AppendAllText(Path.Combine(_folder, "apparatus.toml"), "\n[detectors.side]\nkind = \"counting\"\nefficiency = \"2.0e-3\"\n");
        File.AppendAllText(Path.Combine(_folder, "night.toml"), $"\n[[runs]]\nmatch = \"*.h5\"\nmode = \"arrival\"\nlayout = \"hdf5-matrix\"\n{keys}\n");
        Fault fault = Assert.Throws<DataFaultException>(() => ConfigurationReader.Read(_folder)).Fault;
        Assert.Contains(expected, fault.Expected + fault.Remedy, StringComparison.Ordinal);
    }

    [Fact]
    public void Read_OtherCulture_GivesTheSame()
    {
        LabConfiguration plain = ConfigurationReader.Read(_folder);
        Culture.Run("de-DE", () =>
        {
            LabConfiguration german = ConfigurationReader.Read(_folder);
            Assert.Equal(plain.Setup.Beamline, german.Setup.Beamline);
            Assert.Equal(plain.Digest, german.Digest);
        });
    }

    /// <summary>Each row breaks one shipped file in one place: file, text, replacement, then what the fault must name.</summary>
    [Theory]
    [InlineData("apparatus.toml", "source_to_probe =", "sorce_to_probe =", "line 7", "did you mean \"source_to_probe\"?")]
    [InlineData("apparatus.toml", "\"2.00(4) mm\"", "\"2.00(4) ms\"", "[probe] width", "m, cm, mm")]
    [InlineData("apparatus.toml", "\"2.00(4) mm\"", "\"2.00(4)\"", "[probe] width", "m, cm, mm")]
    [InlineData("apparatus.toml", "\"2.00(4) mm\"", "\"-2.00(4) mm\"", "[probe] width", "must be positive")]
    [InlineData("apparatus.toml", "\"2.00(4) mm\"", "\"2,00 mm\"", "[probe] width", "decimal point")]
    [InlineData("apparatus.toml", "\"2.00(4) mm\"", "2.0", "[probe] width", "a string with unit")]
    [InlineData("apparatus.toml", "width = \"2.00(4) mm\"", "#", "[probe] width", "no such key")]
    [InlineData("apparatus.toml", "laser_jitter = \"0.6 MHz\"", "laser_jitter = \"0.6 MHz\"\nlaser_jitter = \"0.7 MHz\"", "line", "laser_jitter")]
    [InlineData("apparatus.toml", "\"1.60e-3 ± 5e-5\"", "\"1.60 ± 0.05\"", "[detector] efficiency", "(0, 1]")]
    [InlineData("apparatus.toml", "\"exponential-gaussian\"", "\"exponential-gausian\"", "[emission] profile", "did you mean \"exponential-gaussian\"?")]
    [InlineData("apparatus.toml", "profile = \"exponential-gaussian\"", "profile = \"gaussian\"", "[emission] tail", "unknown key")]
    [InlineData("apparatus.toml", "\"top-hat\"", "\"tophat\"", "[probe] shape", "did you mean \"top-hat\"?")]
    [InlineData("apparatus.toml", "saturation = \"1.10 ± 0.07\"", "#", "[probe] saturation", "neither saturation nor scattering_rate")]
    [InlineData("apparatus.toml", "saturation = \"1.10 ± 0.07\"", "saturation = \"1.1\"\nscattering_rate = \"5e6 1/s\"", "[probe] saturation", "both saturation and scattering_rate")]
    [InlineData("apparatus.toml", "stages = 45", "stages = 0", "[decelerator] stages", "1 to 100000")]
    [InlineData("apparatus.toml", "stages = 45", "stages = 4.5", "[decelerator] stages", "whole number")]
    [InlineData("apparatus.toml", "length = \"0.4500(5) m\"", "length = \"0.9 m\"", "[beamline] source_to_probe", "end of the decelerator")]
    [InlineData("apparatus.toml", "off = \"free\"", "off = \"fre\"", "[conditions] off", "did you mean \"free\"?")]
    [InlineData("apparatus.toml", "species = \"SrF\"", "species = \"SrH\"", "species", "did you mean \"SrF\"?")]
    [InlineData("apparatus.toml", "[probe]", "[prob]", "prob", "did you mean \"probe\"?")]
    [InlineData("apparatus.toml", "[probe]", "[probe", "syntax", "valid TOML")]
    [InlineData("apparatus.toml", "kind = \"counting\"", "kind = \"analog\"", "volt_second_per_electron", "no such key")]
    [InlineData("species/SrF.toml", ", source = \"weak-field-seeking N = 0 state in strong field; common practice, no source\"", "", "[magnetic_moment] source", "no such key")]
    [InlineData("species/SrF.toml", "mass = {", "masses = {", "mass", "a")]
    [InlineData("night.toml", "background = \"steady\"", "background = \"stedy\"", "[analysis] background", "did you mean \"steady\"?")]
    [InlineData("night.toml", "estimator = \"unfolded\"", "estimator = \"magic\"", "[analysis] estimator", "unfolded")]
    [InlineData("night.toml", "shape = \"supersonic\"", "shape = \"supersonc\"", "[analysis] shape", "did you mean \"supersonic\"?")]
    [InlineData("night.toml", "shape_power = 3", "shape_power = 6.1", "[analysis] shape_power", "from 0 to 6")]
    [InlineData("night.toml", "shape_power = 3", "shape_power = -0.1", "[analysis] shape_power", "from 0 to 6")]
    [InlineData("night.toml", "layout = \"csv-wide\"", "layout = \"csv-wid\"", "[runs] layout", "did you mean \"csv-wide\"?")]
    [InlineData("night.toml", "mode = \"arrival\"", "mode = \"arival\"", "[runs] mode", "did you mean \"arrival\"?")]
    [InlineData("night.toml", "velocity_step = \"2 m/s\"", "velocity_step = \"200 m/s\"", "[analysis] velocity_step", "8 to 400 cells")]
    [InlineData("night.toml", "velocity_to = \"260 m/s\"", "velocity_to = \"2 m/s\"", "[analysis] velocity_to", "more than velocity_from")]
    [InlineData("night.toml", "replicas = 200", "replicas = 2", "[analysis] replicas", "50 to 100000")]
    [InlineData("night.toml", "level = \"1 %\"", "level = \"100 %\"", "[compare] level", "between 0 and 100 %")]
    [InlineData("night.toml", "weighting = \"crossings\"                 #", "#", "[predictions] weighting", "declare what a row")]
    [InlineData("night.toml", "file = \"predictions/free.csv\"", "file = \"../free.csv\"", "[predictions] file", "below the day's folder")]
    [InlineData("night.toml", "runs = [\"0912-free\", \"*-doppler\"]", "runs = [\"0912-free\"]", "[joint] runs", "two patterns")]
    [InlineData("night.toml", "runs = [\"0912-free\", \"*-doppler\"]", "runs = \"0912-free\"", "[joint] runs", "list of strings")]
    [InlineData("night.toml", "yield_may_differ = \"10 %\"", "yield_may_differ = \"0 %\"", "[joint] yield_may_differ", "more than 0")]
    [InlineData("night.toml", "yield_may_differ = \"10 %\"", "yield_differs = \"10 %\"", "[joint] yield_differs", "unknown key")]
    [InlineData("layouts/csv-wide.toml", "unit = \"us\"", "unit = \"furlong\"", "[samples.time] unit", "s, ms, us")]
    [InlineData("layouts/csv-wide.toml", "separator = \",\"", "separator = \",,\"", "[table] separator", "one character")]
    [InlineData("layouts/hdf5-matrix.toml", "refers_to = \"bin start\"", "refers_to = \"bin end\"", "[samples] refers_to", "instant")]
    [InlineData("layouts/hdf5-matrix.toml", "format = \"hdf5-matrix\"", "format = \"hdf5-matrx\"", "format", "did you mean \"hdf5-matrix\"?")]
    [InlineData("layouts/hdf5-matrix.toml", "condition = \"shots/decelerator\"", "#", "[shots] condition", "neither condition nor only_condition")]
    public void Read_BrokenFile_SaysWhereWhatAndHow(string file, string text, string replacement, string where, string says)
    {
        string path = Path.Combine(_folder, file), whole = File.ReadAllText(path);
        Assert.Contains(text, whole, StringComparison.Ordinal);
        int at = whole.IndexOf(text, StringComparison.Ordinal);
        File.WriteAllText(path, whole[..at] + replacement + whole[(at + text.Length)..]);
        Fault fault = Assert.Throws<DataFaultException>(() => ConfigurationReader.Read(_folder)).Fault;
        Assert.Contains(file, fault.Where, StringComparison.Ordinal);
        Assert.Contains(", line ", fault.Where, StringComparison.Ordinal);
        Assert.Contains(where, fault.Where, StringComparison.Ordinal);
        Assert.Contains(says, fault.ToString(), StringComparison.Ordinal);
        Assert.Contains(fault, ConfigurationReader.Check(_folder));
    }

    [Fact]
    public void Check_SeveralBrokenFiles_NamesEach()
    {
        File.AppendAllText(Path.Combine(_folder, "layouts", "csv-wide.toml"), "\nextra = 1\n");
        File.AppendAllText(Path.Combine(_folder, "layouts", "hdf5-matrix.toml"), "\nextra = 1\n");
        Assert.Equal(2, ConfigurationReader.Check(_folder).Count);
    }

    [Fact]
    public void Digest_OneByteChanged_Changes()
    {
        string before = ConfigurationReader.Read(_folder).Digest;
        File.AppendAllText(Path.Combine(_folder, "apparatus.toml"), "\n");
        Assert.NotEqual(before, ConfigurationReader.Read(_folder).Digest);
    }

    void CopyShipped()
    {
        string shipped = Path.Combine(Repository.Root, "config");
        foreach (string file in Directory.GetFiles(shipped, "*", SearchOption.AllDirectories))
        {
            string target = Path.Combine(_folder, Path.GetRelativePath(shipped, file));
            Directory.CreateDirectory(Path.GetDirectoryName(target)!);
            File.Copy(file, target);
        }
    }
}
