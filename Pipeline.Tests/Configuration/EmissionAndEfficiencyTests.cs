using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Configuration;

public sealed class EmissionAndEfficiencyTests : IDisposable
{
    const string Shipped = "profile = \"exponential-gaussian\"";
    const string Template = "profile = \"template\"\nfile = \"emission.csv\"\nweighting = \"density\"\n";
    const string Baseline = "baseline_until = \"0 us\"\n";
    const string Flight = "distance = \"5.0 ± 0.5 mm\"\nmean_speed = \"140 ± 10 m/s\"\nspeed_spread = \"20 m/s\"\n";
    readonly DemoDay _demo = new("1515-weak");

    public void Dispose() => _demo.Dispose();

    string Folder => Path.Combine(_demo.Root, "config");

    /// <summary>The table [emission], from its first to its last key, becomes another one.</summary>
    void Emission(string keys)
    {
        string path = Path.Combine(Folder, "apparatus.toml"), whole = File.ReadAllText(path);
        int from = whole.IndexOf("[emission]", StringComparison.Ordinal), to = whole.IndexOf("[probe]", StringComparison.Ordinal);
        Assert.Contains(Shipped, whole[from..to], StringComparison.Ordinal);
        File.WriteAllText(path, $"{whole[..from]}[emission]\n{keys}\n{whole[to..]}");
    }

    void Efficiency(string keys)
    {
        string path = Path.Combine(Folder, "apparatus.toml"), whole = File.ReadAllText(path);
        const string Stated = "efficiency = \"1.60e-3 ± 5e-5\"";
        Assert.Contains(Stated, whole, StringComparison.Ordinal);
        File.WriteAllText(path, whole.Replace(Stated, keys, StringComparison.Ordinal));
    }

    /// <summary>A triangle from 0 to 120 us with its peak at 30 us, every 5 us from -100 us on, with a baseline of 0.5 ± 0.01.</summary>
    void Record(string header = "time (us),signal (V)", Func<double, double>? signal = null, double until = 200)
    {
        IEnumerable<double> times = Enumerable.Range(0, (int)((until + 100) / 5) + 1).Select(i => -100 + 5.0 * i);
        signal ??= t => 0.5 + (t < 0 ? 0 : t < 30 ? t / 30 : Math.Max(0, (120 - t) / 90)) + (t % 10 == 0 ? 0.01 : -0.01);
        File.WriteAllLines(Path.Combine(Folder, "emission.csv"), [header, .. times.Select(t => string.Create(CultureInfo.InvariantCulture, $"{t},{signal(t):R}"))]);
    }

    [Fact]
    public void Read_Gamma_GivesShapeAndScale()
    {
        Emission("profile = \"gamma\"\ndelay = \"10 us\"\nshape = \"2.0 ± 0.2\"\nscale = \"30 ± 3 us\"\nlevel_share = \"28 ± 3 %\"");
        Setup setup = ConfigurationReader.Read(Folder).Setup;
        Assert.Equal(7e-5, Assert.IsType<GammaEmission>(setup.Emission).MeanTime, 1e-15);
        Assert.Equal(0.28 * 1.6e-3, setup.CountsPerPhoton, 1e-12);
        Assert.Superset(new HashSet<string>(["emission shape", "emission scale", "level share"]), Nuisances.Of(setup).Select(n => n.Name).ToHashSet());
        Assert.Contains("all molecules", setup.Remarks[0], StringComparison.Ordinal);
    }

    /// <summary>CaF at 4 K has 0.27719708 of its molecules in N = 1; the slope by half a kelvin on either side. Recomputed by this team.</summary>
    [Fact]
    public void Read_RotationalTemperature_GivesTheShareOfTheLevel()
    {
        Emission("profile = \"instant\"\nrotational_temperature = \"4.0 ± 0.5 K\"\nrotational_constant = \"10.26754 GHz\"\nprobed_level = 1");
        Pipeline.Quantities.Measured share = ConfigurationReader.Read(Folder).Setup.LevelShare!.Value;
        Assert.Equal(0.277197, share.Value, 1e-6);
        Assert.InRange(share.Sigma, 0.02, 0.04);
    }

    [Fact]
    public void Read_Template_GivesThePulse()
    {
        Emission(Template + Baseline + Flight + "delay = \"7 ± 2 us\"");
        Record();
        LabConfiguration lab = ConfigurationReader.Read(Folder);
        TemplateEmission pulse = Assert.IsType<TemplateEmission>(lab.Setup.Emission);
        // noise of 0.01 on every sample moves the mean of the triangle, 50 us, by less than 1 us; the flight is 35.7 us (1 + 2/49)
        Assert.Equal(57e-6 - 37.17e-6, pulse.MeanTime, 1e-6);
        // by hand: 41 samples of 5 us from -5 to 200 us, noise 0.01026 (20 samples of ±0.01), area 60 us; sums of (5 p)^2 = 5.90e6 and of 5 p,
        // squared over 20, 4.74e6 with p from the mean: 3262 us^2 x 0.01026/60 us = 0.558 us beside the stated 2 us
        Assert.Equal(2.076e-6, pulse.Delay.Sigma, 0.003e-6);
        Assert.InRange(pulse.Stretch.Sigma, 0.01, 0.1);
        Assert.Contains("molecules in the probed level", lab.Setup.Remarks[0], StringComparison.Ordinal);
        Assert.Contains("emission.csv", lab.Files);
        Record(signal: t => 0.5 + (t > 0 && t < 100 ? 1 : 0));
        Assert.NotEqual(lab.Digest, ConfigurationReader.Read(Folder).Digest);
    }

    /// <summary>Unit, columns and dialect by keys; without a baseline the stretch is stated.</summary>
    [Fact]
    public void Read_TemplateByKeys_IsTheSame()
    {
        Emission(Template + Baseline);
        Record();
        TemplateEmission first = (TemplateEmission)ConfigurationReader.Read(Folder).Setup.Emission;
        Rewrite();
        TemplateEmission second = (TemplateEmission)ConfigurationReader.Read(Folder).Setup.Emission;
        Assert.Equal(first.MeanTime, second.MeanTime, 1e-12);
        Assert.Equal((1.02, 0.03), (second.Stretch.Value, second.Stretch.Sigma));

        void Rewrite()
        {
            string path = Path.Combine(Folder, "emission.csv");
            File.WriteAllText(path, File.ReadAllText(path).Replace(',', ';').Replace("time (us);signal (V)", "t;absorption", StringComparison.Ordinal));
            string apparatus = Path.Combine(Folder, "apparatus.toml");
            File.WriteAllText(apparatus, File.ReadAllText(apparatus).Replace(Template, Template + "time_column = \"t\"\ntime_unit = \"us\"\nsignal_column = \"absorption\"\nstretch = \"1.02 ± 0.03\"\ntable = { separator = \";\" }\n", StringComparison.Ordinal));
        }
    }

    /// <summary>Each row: keys, header of the record, then what the fault must name.</summary>
    [Theory]
    [InlineData("profile = \"gamma\"\nshape = \"2\"", "", "[emission] scale", "no such key")]
    [InlineData("profile = \"gamma\"\nshape = \"0\"\nscale = \"30 us\"", "", "[emission] shape", "must be positive")]
    [InlineData("profile = \"gamma\"\nshape = \"2\"\nscale = \"30 us\"\nlevel_share = \"120 %\"", "", "[emission] level_share", "(0, 1]")]
    [InlineData("profile = \"instant\"\nlevel_share = \"0.3\"\nrotational_temperature = \"4 K\"", "", "[emission] level_share", "both")]
    [InlineData("profile = \"instant\"\nrotational_temperature = \"4 K\"", "", "[emission] rotational_constant", "no such key")]
    [InlineData(Template + Baseline, "", "[emission] file", "which is not there")]
    [InlineData("profile = \"template\"\nfile = \"../emission.csv\"\nweighting = \"density\"\n" + Baseline, "time (us),signal", "[emission] file", "below the configuration folder")]
    [InlineData("profile = \"template\"\nfile = \"emission.csv\"\n" + Baseline, "time (us),signal", "[emission] weighting", "declare what the signal counts")]
    [InlineData(Template, "time (us),signal", "[emission] stretch", "neither baseline_until nor stretch")]
    [InlineData(Template + Baseline + "distance = \"5 mm\"\nspeed_spread = \"20 m/s\"", "time (us),signal", "[emission] mean_speed", "no such key")]
    [InlineData(Template + Baseline + "distance = \"-5 mm\"\nmean_speed = \"140 m/s\"\nspeed_spread = \"20 m/s\"", "time (us),signal", "[emission] distance", ">= 0")]
    [InlineData(Template + Baseline + "mean_speed = \"140 m/s\"", "time (us),signal", "[emission] mean_speed", "unknown key")]
    [InlineData(Template + Baseline + "stretch = \"0\"", "time (us),signal", "[emission] stretch", "must be positive")]
    [InlineData(Template + Baseline, "time (furlong),signal", "emission.csv, column", "one of s, ms, us")]
    [InlineData(Template + Baseline, "time,signal", "emission.csv, column", "no unit")]
    [InlineData(Template + Baseline + "time_unit = \"ms\"", "time (us),signal", "emission.csv, column", "remove time_unit")]
    [InlineData(Template + Baseline, "time (us),volts", "emission.csv", "no column \"signal\"")]
    [InlineData(Template + "baseline_until = \"-80 us\"", "time (us),signal", "emission.csv", "4 of 61 samples")]
    public void Read_EmissionWrong_SaysWhereAndHow(string keys, string header, string where, string says)
    {
        Emission(keys);
        if (header.Length > 0) Record(header);
        Check(where, says);
    }

    [Fact]
    public void Read_RecordWrong_SaysWhereAndHow()
    {
        Emission(Template + Baseline);
        Record(until: 60);
        Check("emission.csv", "record for longer");
        Record(signal: _ => 0.5);
        Check("emission.csv", "no signal above the baseline");
        Record();
        string path = Path.Combine(Folder, "emission.csv");
        File.WriteAllText(path, File.ReadAllText(path).Replace("\n-90,", "\n-95,", StringComparison.Ordinal));
        Check("emission.csv, line 4", "rising times");
        File.WriteAllText(path, "time (us),signal\n0,1\n1,2\n2,0\n");
        Check("emission.csv", "3 samples");
    }

    [Fact]
    public void Read_EfficiencyByFactors_IsTheirProduct()
    {
        Efficiency("efficiency_from = { lens_diameter = \"25.0(1) mm\", lens_distance = \"50 mm\", transmission = \"0.6 ± 0.03\", quantum_efficiency = \"0.2\", anisotropy = \"1.2 ± 0.1\" }");
        Setup setup = ConfigurationReader.Read(Folder).Setup;
        Assert.Equal(0.01492875 * 0.6 * 0.2 * 1.2, setup.Detector.Efficiency.Value, 1e-9);
        string[] names = [.. Nuisances.Of(setup).Where(n => n.ScalesOnly).Select(n => n.Name)];
        Assert.Equal(["collection", "transmission", "anisotropy"], names);
    }

    [Theory]
    [InlineData("efficiency = \"1e-3\"\nefficiency_from = { transmission = \"0.5\" }", "efficiency", "both efficiency and efficiency_from")]
    [InlineData("", "efficiency", "no such key")]
    [InlineData("efficiency_from = { }", "efficiency_from", "no factors")]
    [InlineData("efficiency_from = { transmision = \"0.5\" }", "transmision", "did you mean \"transmission\"?")]
    [InlineData("efficiency_from = { transmission = \"1.5\" }", "[detector.efficiency_from] transmission", "(0, 1]")]
    [InlineData("efficiency_from = { anisotropy = \"1.5\" }", "efficiency_from", "a product of 1.5")]
    [InlineData("efficiency_from = { numerical_aperture = \"1\" }", "[detector.efficiency_from] numerical_aperture", "(0, 1)")]
    [InlineData("efficiency_from = { lens_diameter = \"25 mm\" }", "[detector.efficiency_from] lens_distance", "no such key")]
    [InlineData("efficiency_from = { lens_diameter = \"0 mm\", lens_distance = \"50 mm\" }", "[detector.efficiency_from] lens_diameter", "a positive length")]
    [InlineData("efficiency_from = { numerical_aperture = \"0.2\", lens_diameter = \"25 mm\", lens_distance = \"50 mm\" }", "numerical_aperture", "both numerical_aperture and a lens")]
    public void Read_EfficiencyWrong_SaysWhereAndHow(string keys, string where, string says)
    {
        Efficiency(keys);
        Check(where, says);
    }

    void Check(string where, string says)
    {
        Fault fault = Assert.Single(ConfigurationReader.Check(Folder));
        Assert.Contains(where, fault.Where, StringComparison.Ordinal);
        Assert.Contains(says, fault.ToString(), StringComparison.Ordinal);
    }
}
