using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Configuration;

/// <summary>What a laser scan may be told of: the field at the probe, how lines move in it, and the drift of the laser.</summary>
public sealed class FieldReaderTests : IDisposable
{
    const string Hyperfine = "[hyperfine]\nlevel = 1\nrotational_constant = { value = \"10 GHz\", source = \"s\" }\nspin_rotation = { value = \"40 MHz\", source = \"s\" }\nfermi_b = { value = \"109 MHz\", source = \"s\" }\ndipolar_c = { value = \"40 MHz\", source = \"s\" }\n";
    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-field").FullName;

    public FieldReaderTests()
    {
        string config = Path.Combine(Repository.Root, "config");
        foreach (string file in Directory.GetFiles(config, "*", SearchOption.AllDirectories))
        {
            string target = Path.Combine(_folder, Path.GetRelativePath(config, file));
            Directory.CreateDirectory(Path.GetDirectoryName(target)!);
            File.Copy(file, target);
        }
    }

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    [Fact]
    public void Read_FieldAndLine_AreInSi()
    {
        Edit("apparatus.toml", "detuning = \"0 ± 0.3 MHz\"", "detuning = \"0 MHz\"\nfield = \"0.5 ± 0.25 G\"");
        Edit("species/SrF.toml", "weight = 1.0", "weight = 1.0\ng_m = -0.5");
        Setup setup = ConfigurationReader.Read(_folder).Setup;
        Assert.Equal((5e-5, 2.5e-5), (setup.Probe.Field.Value, setup.Probe.Field.Sigma));
        Assert.Equal(-0.5 * 0.5 * 1.39962e6, setup.Lines.Single().OffsetHz, 10.0);
        Assert.Contains("residual field", Nuisances.Of(setup).Select(n => n.Name));
    }

    [Fact]
    public void Read_Drift_IsThatOfTheProbeItStandsUnder()
    {
        Edit("apparatus.toml", "# axis_drift = \"0 ± 1 MHz\"", "axis_drift = \"0.5 ± 1 MHz\"");
        LabConfiguration lab = ConfigurationReader.Read(_folder);
        Assert.Equal((0.5e6, 1e6), (lab.Probes["angled"].AxisDrift.Value, lab.Probes["angled"].AxisDrift.Sigma));
        Assert.Equal(default, lab.Setup.Probe.AxisDrift);
    }

    [Fact]
    public void Read_HyperfineSpread_SplitsEveryLine()
    {
        Edit("apparatus.toml", "detuning = \"0 ± 0.3 MHz\"", "detuning = \"0 MHz\"\nfield = \"1 G\"");
        Edit("species/SrF.toml", "[[lines]]\noffset = \"0 MHz\"\nweight = 1.0", Hyperfine + "g_m_spread = 1.0");
        Setup setup = ConfigurationReader.Read(_folder).Setup;
        Assert.Equal(2 * setup.Species.Lines.Count, setup.Lines.Count);
        Assert.Equal(setup.Species.Lines.Sum(l => l.Weight), setup.Lines.Sum(l => l.Weight), 12);
    }

    [Theory]
    [InlineData("weight = 1.0", "weight = 1.0", "[probe] field", "no line of 88Sr19F with g_m")]
    [InlineData("[[lines]]\noffset = \"0 MHz\"\nweight = 1.0", Hyperfine, "[probe] field", "g_m_spread")]
    [InlineData("[[lines]]\noffset = \"0 MHz\"\nweight = 1.0", Hyperfine + "g_m_spread = -1.0", "g_m_spread", "0 or more")]
    [InlineData("weight = 1.0", "weight = 1.0\ng_m = \"one\"", "g_m", "a number")]
    public void Read_FieldWithoutLinesThatMove_SaysSo(string text, string replacement, string where, string says)
    {
        Edit("apparatus.toml", "detuning = \"0 ± 0.3 MHz\"", "field = \"0 ± 0.5 G\"");
        Edit("species/SrF.toml", text, replacement);
        Fault fault = Assert.Throws<DataFaultException>(() => ConfigurationReader.Read(_folder)).Fault;
        Assert.Contains(where, fault.Where, StringComparison.Ordinal);
        Assert.Contains(says, fault.ToString(), StringComparison.Ordinal);
    }

    void Edit(string file, string text, string replacement)
    {
        string path = Path.Combine(_folder, file), old = File.ReadAllText(path);
        Assert.Contains(text, old, StringComparison.Ordinal);
        File.WriteAllText(path, old.Replace(text, replacement, StringComparison.Ordinal));
    }
}
