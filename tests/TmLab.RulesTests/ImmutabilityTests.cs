using System.Reflection;
using System.Runtime.CompilerServices;
using Xunit;

namespace TmLab.RulesTests;

public sealed class ImmutabilityTests
{
    private const BindingFlags DeclaredPublic = BindingFlags.Public | BindingFlags.Instance | BindingFlags.Static | BindingFlags.DeclaredOnly;

    [Fact]
    public void There_are_records_to_look_at() => Assert.True(PublicTypes.All.Count(PublicTypes.IsRecord) >= 10);

    [Fact]
    public void No_public_property_of_a_record_can_be_set_afterwards()
    {
        IEnumerable<string> settable = PublicTypes.All.Where(PublicTypes.IsRecord)
            .SelectMany(t => t.GetProperties(DeclaredPublic).Where(PublicTypes.IsSettable).Select(p => $"{t.FullName}.{p.Name}"));
        Assert.Empty(settable);
    }

    [Fact]
    public void No_public_field_is_writable()
    {
        IEnumerable<string> writable = PublicTypes.All.Where(t => !t.IsEnum)
            .SelectMany(t => t.GetFields(DeclaredPublic).Where(f => !f.IsInitOnly && !f.IsLiteral).Select(f => $"{t.FullName}.{f.Name}"));
        Assert.Empty(writable);
    }

    [Fact]
    public void Public_record_structs_are_readonly()
    {
        IEnumerable<string> wrong = PublicTypes.All.Where(t => t.IsValueType && !t.IsEnum)
            .Where(t => !t.IsDefined(typeof(IsReadOnlyAttribute)))
            .Select(t => t.FullName!);
        Assert.Empty(wrong);
    }

    /// <summary>A record that exposes an array could be changed through it; ImmutableArray says that it cannot.</summary>
    [Fact]
    public void No_public_record_exposes_an_array_or_a_list()
    {
        IEnumerable<string> arrays = PublicTypes.All.Where(PublicTypes.IsRecord)
            .SelectMany(t => t.GetProperties(DeclaredPublic).Where(p => IsMutableCollection(p.PropertyType)).Select(p => $"{t.FullName}.{p.Name}"));
        Assert.Empty(arrays);
    }

    /// <summary>Engine, threads and random source are passed; nothing is set for the whole process.</summary>
    [Fact]
    public void No_static_field_or_property_can_be_set()
    {
        const BindingFlags DeclaredStatic = BindingFlags.Public | BindingFlags.NonPublic | BindingFlags.Static | BindingFlags.DeclaredOnly;
        IEnumerable<string> found = PublicTypes.Libraries.Append("TmLab.Cli").SelectMany(l => Assembly.Load(l).GetTypes())
            .Where(t => !t.Name.Contains('<', StringComparison.Ordinal) && !t.IsDefined(typeof(CompilerGeneratedAttribute)))
            .SelectMany(t => t.GetFields(DeclaredStatic).Where(f => !f.IsInitOnly && !f.IsLiteral).Select(f => $"{t.FullName}.{f.Name}"))
            .Where(n => !n.Contains('<', StringComparison.Ordinal) || n.Contains("k__BackingField", StringComparison.Ordinal));
        Assert.Empty(found);
    }

    private static bool IsMutableCollection(Type type) =>
        type.IsArray || (type.IsGenericType && (type.GetGenericTypeDefinition() == typeof(List<>) || type.GetGenericTypeDefinition() == typeof(Dictionary<,>)));
}
